/** By what somebody signs, as it stands on the paper: "LY-MT-014", "master technician". */
export interface Certificate {
  number: string;
  kind: string;
}

/** What the workshop has of somebody's right to sign; neither is asked for. */
export interface Authorisation {
  certificate?: Certificate | null | undefined;
  /** The last day on which their signature counts, YYYY-MM-DD; null where no end is set. */
  authorisedUntil?: string | null | undefined;
}
