import type { Request, RequestHandler, Response } from 'express';
import type { z } from 'zod';
import type { PropertyAccess, PropertyAction } from '../properties/access.service.ts';
import type { Person } from '../accounts/accounts.service.ts';
import type { Deps } from '../deps.ts';
import type { ProblemCode } from './problems.ts';

export type Method = 'get' | 'post' | 'put' | 'patch' | 'delete';

/**
 * Who may call a route. `property`: the path's `:id` is a property's; `log`: it is a log's, whose
 * property stands before the dash. There is no default: a route without a policy does not compile.
 */
export type Policy = 'anyone' | 'signedIn' | { property: PropertyAction } | { log: PropertyAction };

/** A JSON answer has a schema; anything else names its content type; neither: no content. */
export interface AnswerSpec {
  description: string;
  schema?: z.ZodType;
  contentType?: string;
}

/** A body that the handler reads from the request itself; the schema documents its fields. */
export interface RawBody {
  contentType: string;
  fields: z.ZodType;
}

type PathParams<Path extends string> = Path extends `${string}:${infer Name}/${infer Rest}`
  ? { [K in Name | keyof PathParams<Rest>]: string }
  : Path extends `${string}:${infer Name}`
    ? { [K in Name]: string }
    : Record<never, string>;

type Output<S> = S extends z.ZodType ? z.output<S> : undefined;
type AnswerBody<A> = A extends { schema: infer S extends z.ZodType } ? { body: z.input<S> } : { body?: undefined };
type Answer<A> = {
  [Status in keyof A]: { status: Status; headers?: Record<string, string> } & AnswerBody<A[Status]>;
}[keyof A];

/** Returned by a handler that has written the response itself. */
export const STREAMED = Symbol('streamed');

export interface Call<Path extends string, Pol, Query, Body> {
  deps: Deps;
  req: Request;
  res: Response;
  params: PathParams<Path>;
  query: Output<Query>;
  body: Output<Body>;
  person: Pol extends 'anyone' ? Person | null : Person;
  /** What the caller may do at the property of the path. */
  access: Pol extends string ? null : PropertyAccess;
}

interface RouteSpec<
  Path extends string,
  Pol extends Policy,
  Query extends z.ZodObject | undefined,
  Body extends z.ZodType | RawBody | undefined,
  Answers extends Record<number, AnswerSpec>,
> {
  method: Method;
  path: Path;
  policy: Pol;
  /** The chapter of the documentation. */
  tag: string;
  summary: string;
  description?: string;
  query?: Query;
  body?: Body;
  answers: Answers;
  /** Failures beyond those that policy, query and body imply. */
  problems?: readonly ProblemCode[];
  /** Limits and the like that stand before the handler, after access was decided. */
  before?: (deps: Deps) => RequestHandler[];
  handle(call: Call<Path, Pol, Query, Body>): Promise<Answer<Answers> | typeof STREAMED>;
}

/** A route as the router and the documentation see it. */
export interface Route {
  method: Method;
  path: string;
  policy: Policy;
  tag: string;
  summary: string;
  description?: string;
  query?: z.ZodObject;
  body?: z.ZodType | RawBody;
  answers: Record<number, AnswerSpec>;
  problems?: readonly ProblemCode[];
  before?: (deps: Deps) => RequestHandler[];
  handle(call: Call<string, never, undefined, undefined>): Promise<unknown>;
}

/**
 * Declares a route once for Express and for the OpenAPI document: `handle` gets what the schemas let
 * through and must answer with one of the declared answers.
 */
export function defineRoute<
  const Path extends string,
  const Pol extends Policy,
  const Answers extends Record<number, AnswerSpec>,
  Query extends z.ZodObject | undefined = undefined,
  Body extends z.ZodType | RawBody | undefined = undefined,
>(spec: RouteSpec<Path, Pol, Query, Body, Answers>): Route {
  return spec as unknown as Route;
}

export const isRaw = (body: Route['body']): body is RawBody => body !== undefined && 'contentType' in body;

/** The property that a route's path names, if its policy is about one. */
export function propertyIdOf(policy: Policy, id: string): { propertyId: string; action: PropertyAction } | null {
  if (typeof policy === 'string') return null;
  if ('property' in policy) return { propertyId: id, action: policy.property };
  return { propertyId: id.split('-', 1)[0] ?? '', action: policy.log };
}
