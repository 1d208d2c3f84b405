import { expect, it } from "vitest";
import { passwordFault } from "../../app/_server/passwords.ts";

it.each([
  ["eleven char", "too-short"],
  ["x".repeat(257), "too-long"],
  ["password1234", "common"],
  ["Password 1234", "common"],
  ["abababababab", "common"],
  ["aaaaaaaaaaaaaaa", "common"],
  ["mnopqrstuvwxyz", "common"],
  ["poiuytrewq12", null],
  ["Okafor.Okafor1", "own-name"],
  ["four plain words here", null],
  ["pässwörter mögen ümlaute", null],
])("answers %s with %s (ADM-10)", (password, fault) => {
  expect(passwordFault(password, ["R. Okafor", "okafor@demo.invalid"])).toBe(fault);
});
