/** Every address of the client, once. A leaf: it imports nothing, so that any part may import it. */
export const paths = {
  home: () => '/',
  signIn: (returnTo?: string) => (returnTo ? `/sign-in?returnTo=${encodeURIComponent(returnTo)}` : '/sign-in'),
  /** Answered by the server, which sends the browser on to the hospital account. */
  startSignIn: (returnTo: string) => `/auth/sign-in?returnTo=${encodeURIComponent(returnTo)}`,
  tonight: (siteId: string) => `/sites/${siteId}/tonight`,
  visitLogs: (siteId: string) => `/sites/${siteId}/logs`,
  newVisitLog: (siteId: string) => `/sites/${siteId}/logs/new`,
  visitLog: (siteId: string, logId: string) => `/sites/${siteId}/logs/${logId}`,
  arrivalModels: (siteId: string) => `/sites/${siteId}/models`,
  arrivalModel: (siteId: string, modelId: string) => `/sites/${siteId}/models/${modelId}`,
  howNumbersAreMade: (part?: string) => (part ? `/how#${part}` : '/how'),
} as const;
