/** The direction of the Earth's field, as the user gives it. Degrees; declination clockwise from true north. */
export type FieldDirectionSetting =
  | {readonly kind: "angles"; readonly inclination: number; readonly declination: number}
  /** From the World Magnetic Model at the place of each line. */
  | {readonly kind: "date"; readonly date: string};
