import type { z } from 'zod';
import type { Permission } from '../domain/permission.ts';
import type { TokenPurpose } from '../domain/token-purpose.ts';

/**
 * Who may call a route: anybody, anybody signed in, or holders of a permission. For a path that
 * contains `:siteId` the permission must be held at that site, and a site that the caller has no
 * role at answers 404.
 */
export type Access = 'public' | 'signed-in' | Permission;

/** One route, as both sides know it. The server registers it, the client calls it, the API description is made from it. */
export interface Contract<
  Params extends z.ZodType = z.ZodType,
  Query extends z.ZodType = z.ZodType,
  Body extends z.ZodType = z.ZodType,
  Reply extends z.ZodType = z.ZodType,
> {
  /** Short name of the operation, unique. */
  id: string;
  method: 'get' | 'post' | 'put' | 'patch' | 'delete';
  /** Express path, for instance /api/sites/:siteId/censuses. */
  path: string;
  access: Access;
  /** A machine token of the site for this purpose may call it too, without a session. */
  token?: TokenPurpose;
  summary: string;
  params?: Params;
  query?: Query;
  body?: Body;
  /** Content type of a streamed body that is not JSON; such a route reads the request itself. */
  streamedBody?: string;
  reply: Reply;
  /** Content type of a reply that is not JSON; such a route writes the answer itself. */
  replyType?: string;
  /** Status of success, 200 if not stated. */
  status?: 200 | 201 | 202 | 204;
}

/** Keeps the types of a contract's schemas. */
export function defineContract<P extends z.ZodType, Q extends z.ZodType, B extends z.ZodType, R extends z.ZodType>(
  contract: Contract<P, Q, B, R>,
): Contract<P, Q, B, R> {
  return contract;
}

export type ParamsOf<C> = C extends Contract<infer P> ? z.output<P> : never;
export type QueryOf<C> = C extends Contract<z.ZodType, infer Q> ? z.output<Q> : never;
export type BodyOf<C> = C extends Contract<z.ZodType, z.ZodType, infer B> ? z.output<B> : never;
export type BodyInputOf<C> = C extends Contract<z.ZodType, z.ZodType, infer B> ? z.input<B> : never;
export type ReplyOf<C> = C extends Contract<z.ZodType, z.ZodType, z.ZodType, infer R> ? z.output<R> : never;
