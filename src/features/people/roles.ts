/** The roles in the order in which they are offered, each with what it lets a person do. */
export const ROLE_CHOICES = [
  { role: 'technician', does: 'records steps, raises deviations, takes photographs' },
  { role: 'supervisor', does: 'opens and closes jobs, signs hold points, disposes of deviations' },
  { role: 'quality lead', does: 'writes procedures, signs hold points, disposes of deviations' },
  { role: 'auditor', does: 'reads everything, verifies and exports trails' },
  { role: 'owner', does: 'people, roles, tablets, the workshop' },
] as const;
