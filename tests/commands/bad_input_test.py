"""What bad input gets: one sentence that says where, what is wrong and what to do; exit status 2
(unreadable, wrong usage) or 1 (understood but impossible); no output file touched; no crash, and an
end in bounded time. Damaged data is read as far as it is good, and its faults are counted."""
import json
import os
import random
import re
import shutil
import unittest

import program

SENTENCE = re.compile(r"clickwise: [^\n]+?(:\d+(:\d+)?)?: [^\n]+; [^\n]+\n")
MIB = 1 << 20


class BadInput(program.Scratch):
    @classmethod
    def fill(cls):
        program.copy_demos(cls.folder)
        shutil.copy(program.ROOT / "tests/commands/short_scene.toml", cls.folder)
        done = program.run("simulate", "short_scene.toml", "-o", "ride", cwd=cls.folder)
        assert done.status == 0, done.err
        cls.lines = (cls.folder / "ride/log.csv").read_text().splitlines(keepends=True)
        cls.bike = (cls.folder / "ride/bike.toml").read_text()
        (cls.folder / "folder").mkdir()

    def setUp(self):
        self.kept = self.folder / "kept"
        shutil.rmtree(self.kept, ignore_errors=True)
        self.kept.mkdir()
        for name in ("review.json", "review.html", "out.json"):
            (self.kept / name).write_text("from before")

    # Helpers.

    def write(self, name, content):
        path = self.folder / name
        path.write_bytes(content if isinstance(content, bytes) else content.encode())
        return name

    def cells(self, column, value):
        """The log with one column's cells replaced by value(row, cell)."""
        lines = [self.lines[0]]
        for row, line in enumerate(self.lines[1:]):
            cells = line.rstrip("\n").split(",")
            cells[column] = value(row, cells[column])
            lines.append(",".join(cells) + "\n")
        return "".join(lines)

    def refused(self, status, words, *arguments):
        """The command fails as the contract says, and its sentence holds `words`."""
        result = program.run(*arguments, cwd=self.folder)
        self.assertEqual(result.status, status, result.err)
        self.assertRegex(result.err, f"^{SENTENCE.pattern}$")
        self.assertIn(words, result.err)
        self.assertLess(result.seconds, 60)
        return result

    def review_refused(self, status, words, log="ride/log.csv", bike="ride/bike.toml"):
        result = self.refused(status, words, "review", log, "--bike", bike, "-o", "kept", "--json",
                              "kept/out.json")
        self.assertEqual(result.out, "")
        self.assertEqual(sorted(os.listdir(self.kept)), ["out.json", "review.html", "review.json"])
        for path in self.kept.iterdir():
            self.assertEqual(path.read_text(), "from before")

    def bike_refused(self, old, new, words):
        self.assertIn(old, self.bike)
        self.write("bad.toml", self.bike.replace(old, new, 1))
        with self.subTest(new):
            self.review_refused(2, words, bike="bad.toml")
            self.refused(2, words, "damper", "bad.toml")

    def review(self, log, bike="ride/bike.toml"):
        result = self.run_ok("review", log, "--bike", bike, "--json", "-")
        return json.loads(result.out)

    def fault(self, review, kind, channel):
        same = [fault for fault in review["log"]["faults"]
                if (fault["kind"], fault["channel"]) == (kind, channel)]
        self.assertEqual(len(same), 1, review["log"]["faults"])
        return same[0]

    # Files that are no logs.

    def test_files_that_are_no_logs_are_refused(self):
        random.seed(1)
        noise = random.randbytes(100000)
        for name, content, words in [
                ("empty.csv", "", "empty.csv: the file is empty"),
                ("blank.csv", "\n\n  \n", "blank.csv: the file is empty"),
                ("noise.csv", noise, "binary"),
                ("utf16.csv", "".join(self.lines).encode("utf-16"), "UTF-16"),
                ("header.csv", self.lines[0], "header.csv:1: "),
                ("bare_header.csv", self.lines[0].rstrip(), "no row of readings"),
                ("words.csv", "all the words of a letter\nto a friend\n" * 50, "words.csv"),
                ("returns.csv", "".join(self.lines).replace("\n", "\r"), "carriage returns")]:
            with self.subTest(name):
                self.write(name, content)
                self.review_refused(2, words, log=name)
                self.refused(2, words, "inspect", name)

    def test_paths_that_are_no_files_are_refused(self):
        self.review_refused(2, "folder: is a folder", log="folder")
        self.review_refused(2, "nowhere.csv: ", log="nowhere.csv")
        self.review_refused(2, "folder: is a folder", bike="folder")
        self.review_refused(2, "nowhere.toml: ", bike="nowhere.toml")
        self.refused(2, "folder: is a folder", "inspect", "folder")
        self.refused(2, "nowhere.toml: ", "simulate", "nowhere.toml", "-o", "kept")

    def test_log_and_bike_file_the_wrong_way_round_are_refused(self):
        self.review_refused(2, "ride/log.csv:1", log="ride/bike.toml", bike="ride/log.csv")

    def test_a_line_without_end_is_refused_quickly(self):
        endless = b"7" * (64 * MIB)
        for name, content, words in [
                ("endless.csv", endless, "endless.csv:1: "),
                ("endless_row.csv", self.lines[0].encode() + endless, "endless_row.csv:2: "),
                ("endless_cells.csv", b"1," * (32 * MIB), "endless_cells.csv:1: ")]:
            with self.subTest(name):
                self.write(name, content)
                self.review_refused(2, words, log=name)
                self.review_refused(2, "too much for a TOML file", bike=name)

    def test_a_long_line_in_mid_log_costs_one_row(self):
        whole = self.review("ride/log.csv")
        half = len(self.lines) // 2
        text = "".join(self.lines[:half]) + "9" * (64 * MIB) + "\n" + "".join(self.lines[half:])
        review = self.review(self.write("long.csv", text))
        self.assertEqual(review["log"]["samples"], whole["log"]["samples"])
        self.assertEqual(self.fault(review, "missing", "")["count"], 1)

    # Logs that hold too little.

    def test_a_log_for_another_bike_file_is_refused_with_the_columns_it_has(self):
        text = "time,a,b,c\n" + "".join(self.lines[1:])
        self.review_refused(2, 'the log has "time", "a", "b", "c"', log=self.write("other.csv", text))
        self.bike_refused_by_log('column = "fork_adc"', 'column = "fork_acd"', 'did you mean "fork_adc"')
        self.bike_refused_by_log('column = "fork_adc"', "column = 9", "from 1 to 4")

    def bike_refused_by_log(self, old, new, words):
        self.write("bad.toml", self.bike.replace(old, new, 1))
        self.review_refused(2, words, bike="bad.toml")
        self.refused(2, words, "inspect", "ride/log.csv", "--bike", "bad.toml")

    def test_missing_columns_are_refused(self):
        text = "".join(",".join(line.rstrip("\n").split(",")[:2]) + "\n" for line in self.lines)
        self.review_refused(2, "shock_adc", log=self.write("narrow.csv", text))

    def test_a_column_of_words_is_refused(self):
        text = self.cells(1, lambda row, cell: "fork")
        self.review_refused(2, "fork_adc", log=self.write("words.csv", text))

    def test_logs_of_a_few_rows_are_understood_but_impossible(self):
        for rows in (1, 2, 3):
            with self.subTest(rows):
                self.write("few.csv", "".join(self.lines[:1 + rows]))
                self.review_refused(1, "few.csv: ", log="few.csv")

    def test_a_log_shorter_than_a_second_advises_nothing(self):
        review = self.review(self.write("short.csv", "".join(self.lines[:301])))
        self.assertLess(review["log"]["duration_s"], 1.0)
        self.assertEqual(review["advice"], [])
        self.assertEqual(review["not_for_an_adjuster"], [])

    def test_a_bike_that_stood_still_has_no_ride(self):
        text = self.lines[0] + "".join(f"{2000 * row},1067,1140,0.00\n" for row in range(8000))
        self.review_refused(1, "nothing moved", log=self.write("still.csv", text))

    # Clocks.

    def test_clocks_that_cannot_be_are_refused(self):
        random.seed(2)
        clocks = {"backwards": lambda row, cell: str(-2000 * row),
                  "standing": lambda row, cell: "5",
                  "huge steps": lambda row, cell: str(row * 10**15),
                  "huge stamps": lambda row, cell: "1e308",
                  "random": lambda row, cell: str(random.randrange(10**9))}
        for name, value in clocks.items():
            with self.subTest(name):
                self.review_refused(1, "clock.csv: ",
                                    log=self.write("clock.csv", self.cells(0, value)))

    def test_the_wrong_time_unit_is_refused(self):
        for unit in ("ms", "s"):
            self.write("bad.toml", self.bike.replace('unit = "us"', f'unit = "{unit}"', 1))
            self.review_refused(1, "the unit (s, ms or us)", bike="bad.toml")
        text = self.cells(0, lambda row, cell: f"{int(cell) / 1000:.3f}")
        self.review_refused(1, "the unit (s, ms or us)", log=self.write("ms.csv", text))

    def test_a_jump_of_the_clock_is_a_fault_and_costs_no_ride(self):
        whole = self.review("ride/log.csv")
        jumps = {"back 5 s": -5 * 10**6, "a year on": 365 * 86400 * 10**6, "far on": 10**17}
        for name, jump in jumps.items():
            with self.subTest(name):
                text = self.cells(0, lambda row, cell: str(2000 * row + (jump if row > 5000 else 0)))
                review = self.review(self.write("jump.csv", text))
                self.assertEqual(self.fault(review, "time_restart", "")["count"], 1)
                # One interval of 2 ms either way at the joint, and what the smoother loses there.
                self.assertAlmostEqual(review["log"]["riding_s"], whole["log"]["riding_s"], delta=0.1)

    def test_a_gap_is_in_no_bin(self):
        text = "".join(self.lines[:4001] + self.lines[5001:])  # 1000 rows of 2 ms
        review = self.review(self.write("gap.csv", text))
        fault = self.fault(review, "gap", "")
        self.assertEqual(fault["count"], 1)
        # Stamps jitter by nothing here and stand on whole microseconds.
        self.assertAlmostEqual(fault["seconds"], 2.0, delta=2e-3)
        self.assertAlmostEqual(review["log"]["riding_s"], review["log"]["duration_s"] - 2.0,
                               delta=0.02)

    # Readings.

    def counted_s(self, end):
        return sum(end["bands"][direction][band] for direction in ("compression", "rebound")
                   for band in ("low_s", "high_s"))

    def test_cells_that_are_no_readings_are_missing(self):
        words = {3: "nan", 7: "1e308", 9: "", 11: "-inf", 13: "?"}
        text = self.cells(1, lambda row, cell: words.get(row % 20, cell))
        review = self.review(self.write("holes.csv", text))
        fault = self.fault(review, "missing", "fork_adc")
        self.assertEqual(fault["count"], 5 * 500)  # 10000 rows, five in twenty
        self.assertAlmostEqual(fault["seconds"], 2500 * 0.002, delta=1e-6)
        front, rear = review["ends"]["front"], review["ends"]["rear"]
        self.assertAlmostEqual(self.counted_s(front), self.counted_s(rear) - 5.0, delta=0.1)
        self.assertLess(front["travel"]["max_mm"], 180.0)

    def test_a_sensor_unplugged_for_half_the_ride_gives_the_other_half(self):
        random.seed(3)
        half = (len(self.lines) - 1) // 2
        unplugged = {"at zero": (lambda cell: "0", "saturated"),
                     "at full scale": (lambda cell: "4095", "saturated"),
                     "open": (lambda cell: str(random.randrange(4096)), "missing"),
                     "empty": (lambda cell: "", "missing")}
        for name, (value, kind) in unplugged.items():
            with self.subTest(name):
                text = self.cells(1, lambda row, cell: value(cell) if row >= half else cell)
                review = self.review(self.write("half.csv", text))
                # Faults are told in blocks of half a second.
                self.assertAlmostEqual(self.fault(review, kind, "fork_adc")["seconds"], 10.0,
                                       delta=0.6)
                self.assertAlmostEqual(self.counted_s(review["ends"]["front"]), 10.0, delta=0.6)
                self.assertAlmostEqual(self.counted_s(review["ends"]["rear"]), 20.0, delta=0.1)

    def test_a_sensor_unplugged_all_the_ride_leaves_the_other_end(self):
        for value in ("4095", "1e90", "1e308", "nan", ""):
            with self.subTest(value):
                text = self.cells(1, lambda row, cell: value)
                review = self.review(self.write("dead.csv", text))
                self.assertEqual(self.counted_s(review["ends"]["front"]), 0.0)
                self.assertAlmostEqual(self.counted_s(review["ends"]["rear"]), 20.0, delta=0.1)
                self.assertTrue(review["notes"])
                self.assertFalse([step for step in review["advice"] if step["end"] == "front"])
                text = self.run_ok("review", "dead.csv", "--bike", "ride/bike.toml").out
                self.assertIn("no usable reading", text)
                self.assertNotRegex(text, r"\bnan\b|\binf\b")
        both = self.cells(1, lambda row, cell: "4095").replace(",", ";")
        text = "\n".join(";".join(line.split(";")[:2] + ["0", "0"]) if row else line
                         for row, line in enumerate(both.splitlines())) + "\n"
        self.review_refused(1, "no usable ride", log=self.write("both.csv", text))

    def test_a_calibration_of_something_else_leaves_the_end_out(self):
        self.write("bad.toml", self.bike.replace("[[210, 0.0], [3850, 170.0]]",
                                                 "[[1.0, 0.0], [2.0, 170.0]]", 1))
        review = self.review("ride/log.csv", "bad.toml")
        self.assertEqual(self.counted_s(review["ends"]["front"]), 0.0)
        self.assertTrue(any("fork_adc" in note for note in review["notes"]))

    def test_a_log_cut_off_in_mid_line_is_read_to_its_last_whole_line(self):
        review = self.review(self.write("cut.csv", "".join(self.lines)[:-9]))
        self.assertEqual(review["log"]["samples"], len(self.lines) - 2)
        self.assertEqual(self.fault(review, "truncated", "")["count"], 1)

    def test_random_cuts_never_crash(self):
        random.seed(4)
        text = "".join(self.lines).encode()
        for _ in range(12):
            self.write("cut.csv", text[:random.randrange(len(text))])
            result = program.run("review", "cut.csv", "--bike", "ride/bike.toml", cwd=self.folder)
            self.assertIn(result.status, (0, 1, 2), result.err)
            if result.status:
                self.assertRegex(result.err, f"^{SENTENCE.pattern}$")

    def test_random_bytes_in_a_log_never_crash(self):
        random.seed(5)
        for _ in range(8):
            text = bytearray("".join(self.lines[:2000]).encode())
            for _ in range(200):
                text[random.randrange(len(text))] = random.randrange(256)
            self.write("bytes.csv", bytes(text))
            for arguments in (["review", "bytes.csv", "--bike", "ride/bike.toml"],
                              ["inspect", "bytes.csv"]):
                result = program.run(*arguments, cwd=self.folder)
                self.assertIn(result.status, (0, 1, 2), result.err)

    def test_names_that_are_no_utf8_still_give_valid_json(self):
        text = self.cells(1, lambda row, cell: "" if row == 100 else cell)
        header, rest = text.split("\n", 1)
        header = header.replace("fork_adc", "Federweg \u00b0").encode("latin-1")
        self.write("latin.csv", header + b"\n" + rest.encode())
        for column in ('"Federweg \u00b0"', "2"):
            self.write("latin.toml", self.bike.replace('column = "fork_adc"', f"column = {column}", 1))
            review = self.review("latin.csv", "latin.toml")
            self.assertEqual(self.fault(review, "missing", "Federweg \u00b0")["count"], 1)

    # Bike files.

    def test_calibrations_that_go_nowhere_are_refused(self):
        good = "[[210, 0.0], [3850, 170.0]]"
        for bad, words in [("[[210, 0.0]]", "calibration"),
                           ("[[210, 0.0], [2000, 100.0], [3850, 50.0]]", "must rise, or fall"),
                           ("[[210, 0.0], [2000, 100.0], [1850, 150.0]]", "must rise, or fall"),
                           ("[[210, 0.0], [nan, 170.0]]", "finite"),
                           ('[["?", 0.0], ["?", "?"]]', "must be a number"),
                           ("[210, 3850]", "calibration"),
                           ("[[210, 0.0], [210, 170.0]]", "must rise, or fall")]:
            self.bike_refused(good, bad, words)

    def test_a_falling_calibration_turns_the_travel_round(self):
        self.write("fall.toml", self.bike.replace("[[210, 0.0], [3850, 170.0]]",
                                                  "[[210, 170.0], [3850, 0.0]]", 1))
        front = self.review("ride/log.csv", "fall.toml")["ends"]["front"]["travel"]
        usual = self.review("ride/log.csv")["ends"]["front"]["travel"]
        # The same readings on the mirrored line; both means are over the same samples.
        self.assertAlmostEqual(front["mean_mm"], 170.0 - usual["mean_mm"], delta=0.05)

    def test_mistakes_in_the_bike_file_are_shown_where_they_stand(self):
        for old, new, words in [
                ("stroke_mm = 170.0", "stroke_mm = -170.0", "bad.toml:17:13: front.stroke_mm = -170.0"),
                ("stroke_mm = 170.0", "stroke_mm = inf", "finite"),
                ("stroke_mm = 170.0", 'stroke_mm = "?"', "bad.toml:17:13: "),
                ("stroke_mm = 170.0", "stoke_mm = 170.0", "did you mean stroke_mm?"),
                ("friction_n", "fricton_n", "did you mean friction_n?"),
                ("setting = 8", "setting = 17", "from 0 to 16"),
                ("front_share = 0.42", "front_share = 42", "above 0 and below 1"),
                ("clickwise-bike-1", "clickwise-bike-9", "bad.toml:1:10: "),
                ("mass_kg = 78.0", "mass_kg = = 78.0", "bad.toml:9:"),
                ("mass_kg = 78.0", "mass_kg = 78.0\nmass_lb = 172.0", "keep one of the two"),
                ('unit = "us"', 'unit = "ns"', '"s", "ms", "us"'),
                ('column = "fork_adc"', "column = 0", "from 1 to"),
                ('column = "fork_adc"', "column = true", "bad.toml:26:10: "),
                ('kind = "potentiometer"', 'kind = "imu_pair"', "upper = "),
                ('kind = "hydraulic"', 'kind = "hydralic"', '"hydraulic", "dyno", "assumed"'),
                ("[log]", "[log]\npacked = {}", "log.packed.frame is missing"),
                ("[log]", "[log]\nrate_hz = 1000", "not both"),
                ('time = { column = "t_us", unit = "us" }', "", "the log's time is missing"),
                ("points = [[0, 120], [40, 360]", "points = [[0, 120], [40, 100]", "must not fall"),
                ("closed_mm_s = 12.0", "closed_mm_s = 192.0", "swap the two")]:
            self.bike_refused(old, new, words)

    def test_files_that_are_no_bike_files_are_refused(self):
        random.seed(6)
        for name, content in [("empty.toml", ""), ("noise.toml", random.randbytes(3000)),
                              ("scene.toml", 'schema = "clickwise-scene-1"\n'),
                              ("ends.toml", self.bike.split("[front]")[0])]:
            with self.subTest(name):
                self.write(name, content)
                self.review_refused(2, name, bike=name)
                self.refused(2, name, "damper", name)

    def test_one_column_for_two_things_is_refused(self):
        for column in ("shock_adc", "t_us", "wheel_kmh"):
            self.write("bad.toml", self.bike.replace('column = "fork_adc"', f'column = "{column}"', 1))
            self.review_refused(2, f"both name {column}", bike="bad.toml")

    def test_a_dyno_table_that_is_not_there_is_refused(self):
        before, after = self.bike.split("[front.damper]")
        rear = after[after.index("[rear]"):]
        self.write("bad.toml", before + '[front.damper]\nkind = "dyno"\nfile = "fork.csv"\n\n' + rear)
        self.refused(2, "there is no such file", "damper", "bad.toml")

    # The command line.

    def test_wrong_usage_is_refused(self):
        review = ["review", "ride/log.csv", "--bike", "ride/bike.toml"]
        for arguments, words in [
                ([], "a command is missing"),
                (["reveiw", "ride/log.csv"], "there is no command reveiw"),
                (["review"], "LOG is required"),
                (["review", "ride/log.csv"], "--bike is missing"),
                (["inspect"], "see clickwise inspect --help"),
                (["damper"], "BIKE.toml is required"),
                (["simulate", "short_scene.toml"], "--output is required"),
                ([*review, "more.csv"], "more.csv"),
                ([*review, "--frob"], "--frob"),
                ([*review, "--split"], "--split"),
                ([*review, "--smooth", "0"], "--smooth"),
                ([*review, "--smooth", "x"], "--smooth"),
                ([*review, "--json", ""], "--json"),
                ([*review, "-o", ""], "--output"),
                ([*review, "--json", "a", "--json", "b"], "--json")]:
            with self.subTest(arguments):
                self.refused(2, words, *arguments)

    def test_splits_that_are_no_speeds_are_refused_by_every_command(self):
        for split in ("abc", "-5", "0", "nan", "inf", "1e9", "7,5", "front=700",
                      "front.compression=", "middle.compression=700", "front.up=700",
                      "front.compression=700x"):
            for arguments in (["review", "ride/log.csv", "--bike", "ride/bike.toml"],
                              ["inspect", "ride/log.csv"], ["damper", "ride/bike.toml"],
                              ["simulate", "short_scene.toml", "-o", "kept"]):
                with self.subTest((split, arguments[0])):
                    self.refused(2, f"--split {split}: ", *arguments, "--split", split)

    def test_outputs_that_cannot_be_written_are_told(self):
        review = ["review", "ride/log.csv", "--bike", "ride/bike.toml", "--quiet"]
        self.write("plain", "a file, not a folder")
        for arguments in ([*review, "-o", "plain"], [*review, "--json", "plain/out.json"],
                          [*review, "--json", "folder"],
                          ["damper", "ride/bike.toml", "--quiet", "-o", "plain"],
                          ["simulate", "short_scene.toml", "-o", "plain"]):
            with self.subTest(arguments):
                self.refused(1, "plain" if "plain" in arguments[-1] else "folder", *arguments)
        self.assertEqual((self.folder / "plain").read_text(), "a file, not a folder")

    @unittest.skipUnless(os.path.exists("/dev/full"), "this machine has no /dev/full")
    def test_a_full_disk_behind_stdout_is_told(self):
        for more in ([], ["--json", "-"]):
            with open("/dev/full", "w") as full:
                done = program.subprocess.run(
                    [program.BINARY, "review", "ride/log.csv", "--bike", "ride/bike.toml", *more],
                    cwd=self.folder, stdout=full, stderr=program.subprocess.PIPE, text=True,
                    env=program.ENVIRONMENT)
            self.assertEqual(done.returncode, 1)
            self.assertRegex(done.stderr, f"^{SENTENCE.pattern}$")

    def test_scenes_that_cannot_be_are_refused(self):
        scene = (self.folder / "short_scene.toml").read_text()
        for old, new, words in [('class = "D"', 'class = "Z"', "bad.toml:12:"),
                                ("duration_s = 20.0", "", "bad.toml"),
                                ("duration_s = 20.0", "duration_s = -1", "duration_s"),
                                ('kind = "drop"', 'kind = "dorp"', '"drop"'),
                                ("practice-run/bike.toml", "practice-run/none.toml", "none.toml"),
                                ("noise_counts", "noise_count", "did you mean noise_counts?"),
                                ("seed = 5", 'seed = "five"', "seed")]:
            with self.subTest(new):
                self.assertIn(old, scene)
                self.write("bad.toml", scene.replace(old, new, 1))
                self.refused(2, words, "simulate", "bad.toml", "-o", "new")
                self.assertFalse((self.folder / "new").exists())


program.main()
