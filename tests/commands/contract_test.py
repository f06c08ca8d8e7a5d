"""The review's JSON and the commands' shared behaviour, as other people's scripts rely on them."""
import json
import math
import os
import re
import shutil
import stat
import tomllib

import program

# Every field that scripts rely on, by the JSON's own shape; a type stands for any value of it.
NUMBER = (int, float)
FAULT = {"kind": str, "channel": str, "count": int, "seconds": NUMBER}
BAND = {"split_mm_s": NUMBER, "low_s": NUMBER, "high_s": NUMBER, "low_j": NUMBER, "high_j": NUMBER,
        "p50_mm_s": NUMBER, "p95_mm_s": NUMBER, "max_mm_s": NUMBER}
STOP = {"t_s": NUMBER, "depth_mm": NUMBER, "closing_speed_mm_s": NUMBER}
END = {"source": str, "stroke_mm": NUMBER, "velocity_noise_mm_s": NUMBER,
       "velocity_histogram": {"edges_mm_s": [NUMBER], "seconds": [NUMBER]},
       "bands": {"compression": BAND, "rebound": BAND},
       "travel": {"mean_mm": NUMBER, "p50_mm": NUMBER, "p95_mm": NUMBER, "max_mm": NUMBER,
                  "histogram": {"edges_mm": [NUMBER], "seconds": [NUMBER]}},
       "bottom_outs": [STOP], "top_outs": [STOP], "adjusters": dict}
STEP = {"end": str, "adjuster": str, "from": int, "to": int, "symptom": str, "why": str,
        "confidence": NUMBER, "predicted": dict}
REVIEW = {"schema": str,
          "log": {"name": str, "duration_s": NUMBER, "riding_s": NUMBER, "rate_hz": NUMBER,
                  "samples": int, "faults": [FAULT]},
          "ends": dict, "front_rear": dict, "advice": [STEP]}
KINDS = {"gap", "time_restart", "spike", "stuck", "saturated", "missing", "truncated"}
ADJUSTERS = {"low_speed_compression", "high_speed_compression", "low_speed_rebound",
             "high_speed_rebound"}


def refuse_constant(name):
    raise ValueError(f"{name} is no JSON (RFC 8259 section 6)")


def parse(text):
    return json.loads(text, parse_constant=refuse_constant)


class Contract(program.Scratch):
    @classmethod
    def fill(cls):
        program.copy_demos(cls.folder)
        shutil.copy(program.ROOT / "tests/commands/short_scene.toml", cls.folder)
        for scene, to in (("demo-runs/practice-run/scene.toml", "practice"),
                          ("demo-runs/bottom-out-count/scene.toml", "count"),
                          ("short_scene.toml", "short")):
            done = program.run("simulate", scene, "-o", to, "--quiet", cwd=cls.folder)
            assert done.status == 0, done.err

    def review(self, ride, *more):
        return parse(self.run_ok("review", f"{ride}/log.csv", "--bike", f"{ride}/bike.toml",
                                 "--json", "-", *more).out)

    def has_shape(self, value, shape, where):
        if isinstance(shape, dict):
            self.assertIsInstance(value, dict, where)
            for key, part in shape.items():
                self.assertIn(key, value, where)
                self.has_shape(value[key], part, f"{where}.{key}")
        elif isinstance(shape, list):
            self.assertIsInstance(value, list, where)
            for i, item in enumerate(value):
                self.has_shape(item, shape[0], f"{where}[{i}]")
        else:
            self.assertIsInstance(value, shape, where)
            self.assertNotIsInstance(value, bool, where)

    def directions(self, end):
        return [end["bands"][name] for name in ("compression", "rebound")]

    # Section 5.

    def test_every_field_that_scripts_rely_on_is_there(self):
        for ride in ("practice", "count"):
            with self.subTest(ride):
                review = self.review(ride)
                self.has_shape(review, REVIEW, "review")
                self.assertEqual(review["schema"], "clickwise-review-1")
                self.assertEqual(set(review["ends"]), {"front", "rear"})
                for name, end in review["ends"].items():
                    self.has_shape(end, END, name)
                    self.assertEqual(end["source"], "potentiometer")
                    self.assertTrue(end["adjusters"])
                    self.assertLessEqual(set(end["adjusters"]), ADJUSTERS)
                    for key, adjuster in end["adjusters"].items():
                        self.has_shape(adjuster, {"setting": int, "clicks": int, "reach": dict}, key)
                        direction = key.split("_")[2]
                        self.assertEqual(set(adjuster["reach"]), {f"{direction}_low", f"{direction}_high"})
                for fault in review["log"]["faults"]:
                    self.assertIn(fault["kind"], KINDS)
                for step in review["advice"]:
                    self.assertIn(step["adjuster"], review["ends"][step["end"]]["adjusters"])
                    self.assertNotEqual(step["from"], step["to"])
                    self.assertLessEqual(abs(step["from"] - step["to"]), 3)
                    self.assertTrue(0.0 < step["confidence"] <= 1.0)
                    for figure in step["predicted"].values():
                        self.has_shape(figure, dict.fromkeys(("now", "then", "low", "high"), NUMBER), "")

    def test_the_demos_show_what_they_are_for(self):
        self.assertTrue(self.review("practice")["advice"])
        self.assertTrue(self.review("count")["ends"]["front"]["bottom_outs"])

    def test_the_bands_make_up_the_riding_time(self):
        for ride in ("practice", "count", "short"):
            for more in ([], ["--split", "300"], ["--split", "front.rebound=20000"]):
                review = self.review(ride, *more)
                for name, end in review["ends"].items():
                    with self.subTest((ride, more, name)):
                        total = math.fsum(band[key] for band in self.directions(end)
                                          for key in ("low_s", "high_s"))
                        masked = any(fault["channel"] for fault in review["log"]["faults"])
                        whole = end["riding_s"] if masked else review["log"]["riding_s"]
                        self.assertAlmostEqual(total, whole, delta=1e-6)
                        histogram = end["velocity_histogram"]
                        self.assertAlmostEqual(math.fsum(histogram["seconds"]), total, delta=1e-6)
                        self.assertEqual(len(histogram["edges_mm_s"]), len(histogram["seconds"]) + 1)
                        travel = end["travel"]["histogram"]
                        self.assertAlmostEqual(math.fsum(travel["seconds"]), total, delta=1e-6)
                        self.assertEqual(len(travel["edges_mm"]), len(travel["seconds"]) + 1)

    def test_faulted_time_is_in_no_band(self):
        # A spike, one masked sample at least, on one end of this ride; a gap on both.
        review = self.review("count")
        faults = review["log"]["faults"]
        self.assertTrue(any(fault["channel"] for fault in faults))
        self.assertTrue(any(fault["kind"] == "gap" for fault in faults))
        for end in review["ends"].values():
            self.assertLessEqual(end["riding_s"], review["log"]["riding_s"])
        gaps = sum(fault["seconds"] for fault in faults if fault["kind"] == "gap")
        self.assertGreater(gaps, 0.0)
        self.assertLess(review["log"]["riding_s"], review["log"]["duration_s"] - gaps + 1e-6)

    def test_the_bands_are_the_histogram_on_either_side_of_the_split(self):
        end = self.review("practice", "--split", "front.compression=437",
                          "--split", "front.rebound=811")["ends"]["front"]
        histogram = end["velocity_histogram"]
        edges = histogram["edges_mm_s"]
        for edge in (437.0, -811.0):
            self.assertLess(min(abs(e - edge) for e in edges), 1e-6)
        high = math.fsum(s for s, low in zip(histogram["seconds"], edges) if low >= 437.0 - 1e-6)
        self.assertAlmostEqual(high, end["bands"]["compression"]["high_s"], delta=1e-6)
        high = math.fsum(s for s, top in zip(histogram["seconds"], edges[1:]) if top <= -811.0 + 1e-6)
        self.assertAlmostEqual(high, end["bands"]["rebound"]["high_s"], delta=1e-6)

    def test_moving_the_split_changes_nothing_but_what_is_split(self):
        a, b = (self.review("practice", "--split", split) for split in ("400", "1300"))
        self.assertEqual(a["log"], b["log"])
        for name in a["ends"]:
            with self.subTest(name):
                ends = [review["ends"][name] for review in (a, b)]
                for key in ("travel", "bottom_outs", "top_outs", "velocity_noise_mm_s", "riding_s",
                            "stroke_mm", "source", "hit_trains"):
                    self.assertEqual(*(end[key] for end in ends))
                for bands in zip(*(self.directions(end) for end in ends)):
                    for key in ("p50_mm_s", "p95_mm_s", "max_mm_s"):
                        self.assertEqual(*(band[key] for band in bands))
                    self.assertEqual([band["split_mm_s"] for band in bands], [400, 1300])
                    self.assertGreaterEqual(bands[0]["high_s"], bands[1]["high_s"])
                    for low, high in (("low_s", "high_s"), ("low_j", "high_j")):
                        sums = [band[low] + band[high] for band in bands]
                        self.assertAlmostEqual(*sums, delta=1e-9 * max(sums) + 1e-9)
                totals = [math.fsum(end["velocity_histogram"]["seconds"]) for end in ends]
                self.assertAlmostEqual(*totals, delta=1e-6)

    def test_a_minimal_bike_file_gives_histograms_travel_and_bottom_outs(self):
        bike = (self.folder / "short/bike.toml").read_text()
        sensor = bike[bike.index("[front.sensor]"):bike.index("[front.spring]")]
        (self.folder / "least.toml").write_text(
            'schema = "clickwise-bike-1"\n[log]\ntime = { column = "t_us", unit = "us" }\n'
            f"[front]\nstroke_mm = 170.0\n{sensor}")
        review = parse(self.run_ok("review", "short/log.csv", "--bike", "least.toml", "--json", "-").out)
        end = review["ends"]["front"]
        self.assertEqual(set(review["ends"]), {"front"})
        self.assertGreater(math.fsum(end["velocity_histogram"]["seconds"]), 10.0)
        self.assertGreater(end["travel"]["max_mm"], end["travel"]["mean_mm"])
        self.assertEqual((review["advice"], end["adjusters"]), ([], {}))
        text = "\n".join(review["missing"])
        for key in ("front.damper", "front.spring", "rider.mass_kg", "[rear]"):
            self.assertIn(key, text)

    def test_the_same_command_twice_gives_the_same_bytes(self):
        arguments = ["review", "practice/log.csv", "--bike", "practice/bike.toml", "--json", "-"]
        self.assertEqual(self.run_ok(*arguments).out, self.run_ok(*arguments).out)

    # Section 2.

    def test_json_goes_alone_to_stdout_or_whole_into_a_file(self):
        arguments = ["review", "short/log.csv", "--bike", "short/bike.toml"]
        alone = self.run_ok(*arguments, "--json", "-")
        self.assertEqual(alone.err, "")
        self.run_ok(*arguments, "--quiet", "--json", "short.json")
        self.assertEqual((self.folder / "short.json").read_text(), alone.out)
        self.run_ok(*arguments, "--quiet", "-o", "new/report")
        self.assertEqual(sorted(os.listdir(self.folder / "new/report")), ["review.html", "review.json"])
        self.assertEqual((self.folder / "new/report/review.json").read_text(), alone.out)
        page = (self.folder / "new/report/review.html").read_text()
        self.assertTrue(page.lstrip().lower().startswith("<!doctype html>"))
        self.assertIn("</html>", page)
        mode = stat.S_IMODE((self.folder / "new/report/review.json").stat().st_mode)
        self.assertTrue(mode & stat.S_IRUSR and mode & stat.S_IROTH, oct(mode))

    def test_a_file_from_before_is_replaced_whole(self):
        (self.folder / "old.json").write_text("x" * 10**6)
        self.run_ok("damper", "short/bike.toml", "--quiet", "--json", "old.json")
        report = parse((self.folder / "old.json").read_text())
        self.assertEqual(report["schema"], "clickwise-damper-1")
        self.assertEqual(set(report["ends"]), {"front", "rear"})
        left = [name for name in os.listdir(self.folder) if name.startswith("old.json")]
        self.assertEqual(left, ["old.json"])

    def test_quiet_prints_nothing(self):
        for arguments in (["review", "short/log.csv", "--bike", "short/bike.toml"],
                          ["inspect", "short/log.csv"], ["damper", "short/bike.toml"],
                          ["simulate", "short_scene.toml", "-o", "again"]):
            result = self.run_ok(*arguments, "--quiet")
            self.assertEqual((result.out, result.err), ("", ""), arguments)

    def test_every_command_tells_its_version_and_its_help(self):
        version = self.run_ok("--version").out
        self.assertRegex(version, r"^clickwise \d+\.\d+\.\d+\n$")
        for command in ("review", "inspect", "damper", "simulate"):
            self.assertEqual(self.run_ok(command, "--version").out, version)
            help_text = self.run_ok(command, "--help").out
            for option in ("--split", "--quiet", "--version"):
                self.assertIn(option, help_text)

    def escapes(self, **environment):
        """What `review` prints to a terminal."""
        leader, follower = os.openpty()
        process = program.subprocess.Popen(
            [program.BINARY, "review", "short/log.csv", "--bike", "short/bike.toml"],
            cwd=self.folder, stdout=follower, env={**program.ENVIRONMENT, **environment})
        os.close(follower)
        text = b""
        try:
            while block := os.read(leader, 65536):
                text += block
        except OSError:  # Linux ends a terminal's reading with an error
            pass
        os.close(leader)
        self.assertEqual(process.wait(timeout=program.LONGEST_S), 0)
        self.assertIn(b"of riding in", text)
        return re.findall(rb"\x1b", text)

    def test_only_a_terminal_without_no_color_gets_emphasis(self):
        self.assertTrue(self.escapes(NO_COLOR=""))  # set but empty is not set: no-color.org
        self.assertFalse(self.escapes(NO_COLOR="1"))
        piped = self.run_ok("review", "short/log.csv", "--bike", "short/bike.toml").out
        self.assertNotIn("\x1b", piped)

    def test_a_truth_is_written_beside_the_log(self):
        self.assertEqual(sorted(os.listdir(self.folder / "short")),
                         ["bike.toml", "log.csv", "truth.csv", "truth.toml"])

    def test_the_same_scene_gives_the_same_ride(self):
        self.run_ok("simulate", "short_scene.toml", "-o", "twice", "--quiet")
        for name in os.listdir(self.folder / "short"):
            self.assertEqual((self.folder / "short" / name).read_bytes(),
                             (self.folder / "twice" / name).read_bytes(), name)

    def test_the_review_finds_the_bottom_outs_of_the_truth(self):
        truth = tomllib.loads((self.folder / "practice/truth.toml").read_text())
        for name, end in self.review("practice")["ends"].items():
            true = truth[name]["bottom_outs"]
            self.assertEqual(len(end["bottom_outs"]), len(true), name)
            for found, stop in zip(end["bottom_outs"], true):
                self.assertAlmostEqual(found["t_s"], stop["t_s"], delta=0.02)
                # The bound that the job is held to: 10 % or 60 mm/s.
                self.assertAlmostEqual(found["closing_speed_mm_s"], stop["closing_speed_mm_s"],
                                       delta=max(60.0, 0.1 * stop["closing_speed_mm_s"]))


program.main()
