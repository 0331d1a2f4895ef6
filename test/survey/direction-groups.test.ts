import fc from "fast-check";
import {describe, expect, test} from "vitest";
import {
  axialDifference,
  type Chord,
  directionGroups,
  foldedAzimuth,
  meanAzimuth,
} from "../../lib/survey/direction-groups.ts";

const chord = (azimuth: number, length = 100): Chord => ({
  dx: length * Math.sin((azimuth * Math.PI) / 180),
  dy: length * Math.cos((azimuth * Math.PI) / 180),
});
const reversed = ({dx, dy}: Chord): Chord => ({dx: -dx, dy: -dy});
const chords = () =>
  fc.array(fc.tuple(fc.double({min: 0, max: 360, noNaN: true}), fc.double({min: 0.1, max: 1e5, noNaN: true})), {
    minLength: 1,
    maxLength: 30,
  });

describe("directions", () => {
  test("across north have their mean near north, not east", () => {
    expect(meanAzimuth([chord(178), chord(4)])).toBeCloseTo(1, 6);
    expect(meanAzimuth([chord(358), chord(184)])).toBeCloseTo(1, 6);
    expect(foldedAzimuth(chord(270))).toBeCloseTo(90, 9);
    expect(axialDifference(179, 2)).toBeCloseTo(3, 12);
  });

  test("weigh by length", () => {
    // Doubled angles 20° and 60° with weights 3 and 1, by hand: atan2(3 sin 20 + sin 60, 3 cos 20 + cos 60)/2.
    const [a, b] = [20, 60].map((d) => (d * Math.PI) / 180);
    const want = (Math.atan2(3 * Math.sin(a!) + Math.sin(b!), 3 * Math.cos(a!) + Math.cos(b!)) * 90) / Math.PI;
    expect(meanAzimuth([chord(10, 300), chord(30, 100)])).toBeCloseTo(want, 5);
  });
});

describe("groups", () => {
  test("take every line once, all within 20° of the mean, whichever way each was flown", () => {
    fc.assert(
      fc.property(chords(), fc.infiniteStream(fc.boolean()), (list, flips) => {
        const all = list.map(([azimuth, length]) => chord(azimuth, length));
        const groups = directionGroups(all);
        expect(groups.flatMap(({members}) => members).sort((a, b) => a - b)).toEqual(all.map((_, i) => i));
        // The mean is rounded to 1e-6°.
        for (const {members, azimuth} of groups)
          for (const member of members)
            expect(axialDifference(foldedAzimuth(all[member]!), azimuth)).toBeLessThanOrEqual(20 + 1e-6);
        const turned = all.map((each) => (flips.next().value ? reversed(each) : each));
        expect(directionGroups(turned)).toEqual(groups);
      }),
      {seed: 7, numRuns: 300},
    );
  });

  test("are named by length", () => {
    const groups = directionGroups([chord(0, 10), chord(90, 100), chord(92, 100), {dx: 0, dy: 0}]);
    expect(groups.map(({name, members}) => [name, members])).toEqual([
      ["G1", [1, 2, 3]],
      ["G2", [0]],
    ]);
  });

  test("are not turned by one long transit line", () => {
    // By the mean of all of these the axis would lie 8° off the fourteen.
    const groups = directionGroups([chord(118, 310), ...Array.from({length: 14}, () => chord(140, 35))]);
    expect(groups[0]!.azimuth).toBeCloseTo(140, 6);
    expect(groups[1]!.members).toEqual([0]);
  });

  test("of lines without length are one", () => {
    expect(directionGroups([{dx: 0, dy: 0}])).toEqual([{name: "G1", azimuth: 0, members: [0], length: 0}]);
  });
});
