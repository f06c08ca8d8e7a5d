"""Archives: they give the log's figures bit for bit, other readers open them, a killed writer leaves
no half of one, and a damaged one is never read wrongly."""
import json
import math
import os
import pathlib
import random
import re
import resource
import shutil
import signal
import subprocess
import time

import h5py
import numpy

import program

HALVES = re.compile(r"run\.h5\..{6}")  # what a killed writer may leave beside its target
OLD = program.ROOT / "tests/data/archive/version-1.h5"
DYNO = "velocity_mm_s,force_n\n" + "".join(
    f"{sign * v},{sign * (80 + 1.1 * v)}\n" for sign in (-1, 1) for v in (50, 100, 300, 700, 1500))


def parts(file):
    """Every data set of a file, with its name."""
    found = []
    file.visititems(lambda name, item: found.append((name, item))
                    if isinstance(item, h5py.Dataset) else None)
    return found


class Archive(program.Scratch):
    @classmethod
    def fill(cls):
        program.copy_demos(cls.folder)
        shutil.copy(program.ROOT / "tests/commands/short_scene.toml", cls.folder)
        done = program.run("simulate", "short_scene.toml", "-o", "ride", cwd=cls.folder)
        assert done.status == 0, done.err
        done = program.run("import", "ride/log.csv", "--bike", "ride/bike.toml", "-o", "run.h5",
                           cwd=cls.folder)
        assert done.status == 0, done.err
        assert "run.h5: " in done.out
        cls.bytes = (cls.folder / "run.h5").read_bytes()
        cls.from_log = cls.review(cls, "ride/log.csv", "--bike", "ride/bike.toml")

    def review(self, *arguments):
        done = program.run("review", *arguments, "--json", "-", cwd=self.folder)
        assert done.status == 0, done.err
        return json.loads(done.out)

    def refused(self, words, *arguments, status=2):
        done = program.run(*arguments, cwd=self.folder)
        self.assertEqual(done.status, status, done.err)
        self.assertRegex(done.err, r"\Aclickwise: [^\n]+: [^\n]+; [^\n]+\n\Z")
        self.assertIn(words, done.err)

    def same_but_for_the_source(self, archived, logged):
        for end in archived["ends"].values():
            self.assertEqual(end["source"], "archive")
            end["source"] = "potentiometer"
        self.assertEqual(archived, logged)

    # The same numbers.

    def test_a_review_of_the_archive_is_that_of_the_log_bit_for_bit(self):
        self.same_but_for_the_source(self.review("run.h5"), self.from_log)
        self.same_but_for_the_source(self.review("run.h5", "--bike", "ride/bike.toml"),
                                     self.from_log)

    def test_faults_notes_and_dyno_tables_come_along(self):
        lines = (self.folder / "ride/log.csv").read_text().splitlines(keepends=True)
        stuck = [line if not 3000 < i < 5500 else
                 ",".join([line.split(",")[0], "900", *line.split(",")[2:]])
                 for i, line in enumerate(lines)]
        (self.folder / "faulty").mkdir(exist_ok=True)
        (self.folder / "faulty/log.csv").write_text("".join(stuck[:7000] + stuck[7400:])[:-4])
        bike = (self.folder / "ride/bike.toml").read_text()
        bike = re.sub(r"\[front\.damper\]\nkind = \"hydraulic\"\n.*?(?=\n\[rear\])",
                      '[front.damper]\nkind = "dyno"\nfile = "fork_dyno.csv"\n', bike, flags=re.S)
        self.assertIn("fork_dyno", bike)
        (self.folder / "faulty/bike.toml").write_text(bike)
        (self.folder / "faulty/fork_dyno.csv").write_text(DYNO)
        logged = self.review("faulty/log.csv", "--bike", "faulty/bike.toml")
        self.assertLessEqual({"gap", "stuck", "truncated"},
                             {fault["kind"] for fault in logged["log"]["faults"]})
        self.run_ok("import", "faulty/log.csv", "--bike", "faulty/bike.toml", "-o", "faulty.h5")
        (self.folder / "faulty/fork_dyno.csv").unlink()
        self.same_but_for_the_source(self.review("faulty.h5"), logged)

    def test_an_archive_of_an_archive_is_the_same(self):
        self.run_ok("import", "run.h5", "-o", "again.h5")
        with h5py.File(self.folder / "run.h5") as first, h5py.File(self.folder / "again.h5") as second:
            for name, data in parts(first):
                self.assertTrue(numpy.array_equal(data[()], second[name][()], equal_nan=data.dtype.kind == "f"),
                                name)
            self.assertEqual(second["front"].attrs["measured_by"], b"potentiometer")

    def test_replay_and_inspect_take_it(self):
        for command in (["replay", "--set", "front.low_speed_compression=4", "--json", "-"],):
            logged = self.run_ok(*command, "ride/log.csv", "--bike", "ride/bike.toml").out
            self.assertEqual(self.run_ok(*command, "run.h5").out, logged)
        text = self.run_ok("inspect", "run.h5").out
        for words in ("archive of log.csv on bike.toml", "/front/velocity_mm_s", "reading noise"):
            self.assertIn(words, text)

    def test_another_bike_file_rules_and_its_differences_are_told(self):
        bike = (self.folder / "ride/bike.toml").read_text()
        (self.folder / "other.toml").write_text(
            bike.replace("stroke_mm = 170.0", "stroke_mm = 160.0", 1))
        review = self.review("run.h5", "--bike", "other.toml")
        self.assertEqual(review["ends"]["front"]["stroke_mm"], 160.0)
        self.assertTrue(any("stroke_mm = 170" in note for note in review["notes"]), review["notes"])
        front_only = bike[:bike.index("[rear]")]
        (self.folder / "front.toml").write_text(front_only)
        review = self.review("run.h5", "--bike", "front.toml")
        self.assertEqual(list(review["ends"]), ["front"])
        self.assertTrue(any("holds a rear end" in note for note in review["notes"]))

    def test_usage(self):
        self.refused("--smooth cannot smooth an archive", "review", "run.h5", "--smooth", "20")
        self.refused("--bike is missing", "import", "ride/log.csv", "-o", "x.h5")
        self.refused("--output", "import", "ride/log.csv", "--bike", "ride/bike.toml")

    # Other readers.

    def test_h5py_reads_what_the_contract_says(self):
        with h5py.File(self.folder / "run.h5") as file:
            self.assertEqual(file.attrs["schema"], b"clickwise-run-1")
            self.assertRegex(file.attrs["created"].decode(), r"\A\d{4}-\d\d-\d\dT\d\d:\d\d:\d\dZ\Z")
            self.assertRegex(file.attrs["program"].decode(), r"\Aclickwise \d")
            self.assertEqual(file["bike"][()].decode(), (self.folder / "ride/bike.toml").read_text())
            start_s, rate_hz = (file["time"].attrs[name] for name in ("start_s", "rate_hz"))
            time_s = file["time"][()]
            self.assertTrue(numpy.allclose(time_s, start_s + numpy.arange(len(time_s)) / rate_hz,
                                           rtol=0, atol=1e-9))
            for name, data in parts(file):
                self.assertIn("units", data.attrs, name)
            # Names of the HDF5 dimension scale specification.
            self.assertEqual(file["time"].attrs["CLASS"], b"DIMENSION_SCALE")
            self.assertEqual(file["time"].attrs["NAME"], b"time")
            self.assertIn("REFERENCE_LIST", file["time"].attrs)
            for end in ("front", "rear"):
                for name in ("travel_mm", "velocity_mm_s", "velocity_sigma_mm_s", "valid"):
                    data = file[end][name]
                    self.assertEqual(data.shape, time_s.shape)
                    self.assertIn("DIMENSION_LIST", data.attrs)
                    self.assertEqual(data.dims[0][0].name, "/time")
                    self.assertIsNotNone(data.chunks)
                    self.assertEqual(data.compression, "gzip")
                counted = (file[end]["valid"][()] == 1) & (file["riding"][()] == 1)
                told = self.from_log["ends"][end]
                self.assertAlmostEqual(counted.sum() / rate_hz, told["riding_s"], delta=1e-9)
                self.assertAlmostEqual(file[end]["travel_mm"][()][counted].mean(dtype=float),
                                       told["travel"]["mean_mm"], delta=1e-6)
                stops = file["events"][end]["bottom_outs"]
                self.assertTrue(numpy.allclose(stops["t_s"][()],
                                               [stop["t_s"] for stop in told["bottom_outs"]]))
                # The travel is what the velocity is the slope of.
                step = numpy.diff(file[end]["travel_mm"][()].astype(float)) * rate_hz
                middle = file[end]["velocity_mm_s"][()].astype(float)
                middle = (middle[1:] + middle[:-1]) / 2
                both = (file[end]["valid"][()][1:] & file[end]["valid"][()][:-1]) == 1
                self.assertLess(numpy.sqrt(numpy.mean((step - middle)[both] ** 2)),
                                0.05 * numpy.sqrt(numpy.mean(middle[both] ** 2)))

    def test_h5dump_reads_all_of_it(self):
        done = subprocess.run(["h5dump", self.folder / "run.h5"], capture_output=True, text=True,
                              timeout=program.LONGEST_S)
        self.assertEqual(done.returncode, 0, done.stderr)
        self.assertEqual(done.stderr, "")
        for words in ('GROUP "front"', 'DATASET "velocity_sigma_mm_s"', "clickwise-run-1"):
            self.assertIn(words, done.stdout)

    # For ever.

    def test_the_first_version_still_gives_its_figures(self):
        review = self.review(OLD)
        known = json.loads((OLD.parent / "version-1.json").read_text())
        told = [[{key: fault[key] for key in ("kind", "channel", "count", "seconds")}
                 for fault in one["log"]["faults"]] for one in (review, known)]
        self.assertEqual(told[0], told[1])
        for key in ("name", "duration_s", "rate_hz", "riding_s", "samples"):
            self.assertEqual(review["log"][key], known["log"][key], key)
        for name, end in known["ends"].items():
            self.assertEqual(review["ends"][name]["velocity_noise_mm_s"], end["velocity_noise_mm_s"])
            for key in ("mean_mm", "p50_mm", "p95_mm", "max_mm"):
                self.assertTrue(math.isclose(review["ends"][name]["travel"][key], end["travel"][key],
                                             rel_tol=1e-9), key)

    # Damage.

    def test_foreign_and_later_files_are_told_apart(self):
        with h5py.File(self.folder / "later.h5", "w") as file:
            file.attrs["schema"] = "clickwise-run-2"
            file.attrs["program"] = "clickwise 7.0"
        self.refused('"clickwise-run-2", written by clickwise 7.0', "review", "later.h5")
        with h5py.File(self.folder / "foreign.h5", "w") as file:
            file["ride/t"] = numpy.arange(100.0)
            file["ride/travel"] = numpy.arange(100.0)
        self.refused("--bike is missing", "review", "foreign.h5")
        self.refused('add hdf5 = { group = "/ride" } to [log]', "review", "foreign.h5", "--bike",
                     "ride/bike.toml")

    def test_each_missing_part_is_named(self):
        with h5py.File(self.folder / "run.h5") as file:
            needed = [name for name, _ in parts(file) if not name.startswith(("events", "speed"))]
            attributes = [(name, key) for name in ("/", "/front", "/time", "/log", "/bike")
                          for key in file[name].attrs
                          if key not in ("units", "crc32", "stroke_mm", "CLASS", "NAME",
                                         "REFERENCE_LIST", "schema")]
        self.assertGreater(len(needed), 12)
        for name in needed:
            with self.subTest(name):
                shutil.copy(self.folder / "run.h5", self.folder / "part.h5")
                with h5py.File(self.folder / "part.h5", "a") as file:
                    del file[name]
                self.refused(f"/{name} is missing", "review", "part.h5")
        for name, key in attributes:
            with self.subTest((name, key)):
                shutil.copy(self.folder / "run.h5", self.folder / "part.h5")
                with h5py.File(self.folder / "part.h5", "a") as file:
                    del file[name].attrs[key]
                self.refused(f"the attribute {key} of {name} is missing", "review", "part.h5")
        shutil.copy(self.folder / "run.h5", self.folder / "part.h5")
        with h5py.File(self.folder / "part.h5", "a") as file:
            short = file["front/travel_mm"][:-5]
            del file["front/travel_mm"]
            file["front/travel_mm"] = short
        self.refused(f"/front/travel_mm holds {len(short)} of {len(short) + 5} samples", "review",
                     "part.h5")

    def test_cut_archives_are_refused(self):
        for share in (0.0, 0.001, 0.01, 0.3, 0.7, 0.99, 0.9999):
            with self.subTest(share):
                (self.folder / "cut.h5").write_bytes(self.bytes[:int(share * len(self.bytes))])
                done = program.run("review", "cut.h5", cwd=self.folder)
                self.assertEqual(done.status, 2, done.err)

    def test_damaged_bytes_never_give_other_figures(self):
        draw = random.Random(11)
        whole = self.review("run.h5", "--by-rule")
        refused = 0
        for turn in range(250):
            damaged = bytearray(self.bytes)
            # Half of the hits fall among the headers at the start and the end of the file.
            at = draw.choice([draw.randrange(len(damaged)), draw.randrange(6000),
                              len(damaged) - 1 - draw.randrange(20000)])
            for i in range(at, min(at + draw.choice([1, 1, 4, 64]), len(damaged))):
                damaged[i] ^= 1 << draw.randrange(8)
            (self.folder / "hurt.h5").write_bytes(damaged)
            done = program.run("review", "hurt.h5", "--by-rule", "--json", "-", cwd=self.folder)
            with self.subTest((turn, at)):
                self.assertIn(done.status, (0, 2), done.err)
                if done.status == 0:
                    self.assertEqual(json.loads(done.out), whole)
                refused += done.status == 2
        self.assertGreater(refused, 50)

    # The writer.

    def test_a_killed_writer_leaves_the_old_file_the_new_one_or_none(self):
        begin = time.monotonic()
        self.run_ok("import", "ride/log.csv", "--bike", "ride/bike.toml", "-o", "timed.h5")
        whole_s = time.monotonic() - begin
        draw = random.Random(4)
        folder = self.folder / "killed"
        folder.mkdir()
        target = folder / "run.h5"
        seen = {"old": 0, "new": 0, "none": 0}
        for turn in range(100):
            target.unlink(missing_ok=True)
            if turn % 2:
                target.write_bytes(b"from before")
            process = subprocess.Popen(
                [program.BINARY, "import", "ride/log.csv", "--bike", "ride/bike.toml", "-o", target,
                 "--quiet"], cwd=self.folder, env=program.ENVIRONMENT)
            time.sleep(draw.uniform(0.0, 1.1 * whole_s))
            process.send_signal(signal.SIGKILL)
            process.wait()
            if not target.exists():
                seen["none"] += 1
                self.assertEqual(turn % 2, 0, "the old file is gone")
            elif target.read_bytes() == b"from before":
                seen["old"] += 1
            else:
                seen["new"] += 1
                with h5py.File(target) as file:
                    for _, data in parts(file):
                        data[()]
                self.same_but_for_the_source(self.review(target), self.from_log)
            for name in os.listdir(folder):
                self.assertTrue(name == "run.h5" or HALVES.fullmatch(name), name)
        self.assertTrue(all(seen.values()), seen)

    def test_a_full_disk_leaves_the_old_file_and_nothing_else(self):
        folder = self.folder / "full"
        folder.mkdir()
        (folder / "run.h5").write_bytes(b"from before")
        for limit in (1000, 20000, len(self.bytes) // 2, len(self.bytes) - 100):
            def small():
                signal.signal(signal.SIGXFSZ, signal.SIG_IGN)
                resource.setrlimit(resource.RLIMIT_FSIZE, (limit, limit))
            done = subprocess.run([program.BINARY, "import", "ride/log.csv", "--bike",
                                   "ride/bike.toml", "-o", folder / "run.h5"], cwd=self.folder,
                                  env=program.ENVIRONMENT, preexec_fn=small, text=True,
                                  capture_output=True, timeout=program.LONGEST_S)
            with self.subTest(limit):
                self.assertEqual(done.returncode, 1, done.stderr)
                self.assertRegex(done.stderr, r"\Aclickwise: [^\n]*run\.h5: cannot be written[^\n]*\n\Z")
                self.assertEqual(os.listdir(folder), ["run.h5"])
                self.assertEqual((folder / "run.h5").read_bytes(), b"from before")
        self.refused("cannot be written", "import", "run.h5", "-o", "ride/log.csv/run.h5", status=1)


if __name__ == "__main__":
    program.main()
