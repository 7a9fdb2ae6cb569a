/// <reference types="astro/client" />

declare namespace App {
  interface Locals {
    /** Who is signed in, found out by the middleware; undefined if nobody is. */
    actor: import('@/server/actor').Actor | undefined;
  }
}
