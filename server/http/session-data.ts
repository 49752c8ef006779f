import 'express-session';

declare module 'express-session' {
  interface SessionData {
    personId: string;
    /** When the person signed in here, UTC seconds. */
    signedInAt: number;
    /** When the person last did something here, UTC seconds, to the minute; 0: locked by hand. */
    usedAt: number;
    /** Browser and system, and the address, at the sign-in: for the person's own list of sessions. */
    device: string;
    address: string;
    /** Kept for the provider's end of a sign-out. */
    idToken: string;
    /** A sign-in under way. */
    signIn: { state: string; nonce: string; codeVerifier: string; returnTo: string; fresh: boolean; startedAt: number };
  }
}
