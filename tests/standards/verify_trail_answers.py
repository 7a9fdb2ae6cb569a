"""Known answers for src/commands/verify_trail.py, from outside the project, and files that mean it ill.

Sources: RFC 8032 section 7.1 (Ed25519), RFC 6979 appendix A.2.5 (ECDSA, P-256 with SHA-256), RFC 8785 sections
3.2.2.2 and 3.2.3 (the form), RFC 4648 section 5 (base64url). The points that are no points are worked out from
the curves' own equations.
"""

import json
import os
import subprocess
import sys
import tempfile
import unittest

COMMAND = os.path.join(os.path.dirname(__file__), "..", "..", "src", "commands", "verify_trail.py")
sys.dont_write_bytecode = True
sys.path.insert(0, os.path.dirname(COMMAND))
import verify_trail  # noqa: E402  (found only by the line above)

# RFC 8032 section 7.1, TEST 1 to 3: public key, message, signature.
ED25519 = [
    (
        "d75a980182b10ab7d54bfed3c964073a0ee172f3daa62325af021a68f707511a",
        "",
        "e5564300c360ac729086e2cc806e828a84877f1eb8e5d974d873e065224901555fb8821590a33bacc61e39701cf9b46b"
        "d25bf5f0595bbe24655141438e7a100b",
    ),
    (
        "3d4017c3e843895a92b70aa74d1b7ebc9c982ccf2ec4968cc0cd55f12af4660c",
        "72",
        "92a009a9f0d4cab8720e820b5f642540a2b27b5416503f8fb3762223ebdb69da085ac1e43e15996e458f3613d0f11d8c"
        "387b2eaeb4302aeeb00d291612bb0c00",
    ),
    (
        "fc51cd8e6218a1a38da47ed00230f0580816ed13ba3303ac5deb911548908025",
        "af82",
        "6291d657deec24024827e69c3abe01a30ce548a284743a445e3680d7db5ac3ac18ff9b538d16f290ae67f760984dc659"
        "4a7c15e9716ed28dc027beceea1ec40a",
    ),
]

# RFC 6979 appendix A.2.5: the key, and the signatures of "sample" and "test" with SHA-256.
P256_KEY = (
    "0460fed4ba255a9d31c961eb74c6356d68c049b8923b61fa6ce669622e60f29fb6"
    "7903fe1008b8bc99a41ae9e95628bc64f2f1b20c2d7e9f5177a3c294d4462299"
)
P256 = [
    (
        b"sample",
        "efd48b2aacb6a8fd1140dd9cd45e81d69d2c877b56aaf991c34d0ea84eaf3716"
        "f7cb1c942d657c41d436c7a1b6e29f65f3e900dbb9aff4064dc4ab2f843acda8",
    ),
    (
        b"test",
        "f1abb023518351cd71d881567b1ea663ed3efcf6c5132b354f28d3b0b7d38367"
        "019f4113742a2b14bd25926b49c649155f267e60d3814b4c0cc84250e46f0083",
    ),
]


class Ed25519(unittest.TestCase):
    def test_holds_for_the_known_answers_and_for_no_bit_less(self):
        for key, message, signature in ED25519:
            key, message, signature = (bytes.fromhex(one) for one in (key, message, signature))
            self.assertTrue(verify_trail.ed25519_holds(key, message, signature))
            self.assertFalse(verify_trail.ed25519_holds(key, message + b"x", signature))
            for at in (0, 31, 32, 62):
                self.assertFalse(verify_trail.ed25519_holds(key, message, _flipped(signature, at)))
            self.assertFalse(verify_trail.ed25519_holds(key, message, signature[:-1]))
            self.assertFalse(verify_trail.ed25519_holds(key, message, signature + b"\0"))
            self.assertFalse(verify_trail.ed25519_holds(key[:-1], message, signature))

    def test_does_not_hold_with_the_order_added_to_s(self):
        key, message, signature = (bytes.fromhex(one) for one in ED25519[2])
        s = int.from_bytes(signature[32:], "little") + verify_trail.ED_L
        self.assertFalse(verify_trail.ed25519_holds(key, message, signature[:32] + s.to_bytes(32, "little")))

    def test_knows_what_is_no_point(self):
        signature = bytes.fromhex(ED25519[0][2])
        above_the_field = (2**255 - 19 + 1).to_bytes(32, "little")
        minus_zero = (1 | 1 << 255).to_bytes(32, "little")
        off_the_curve = (2).to_bytes(32, "little")
        for key in (above_the_field, minus_zero, off_the_curve):
            self.assertIsNone(verify_trail._ed_point(key))
            self.assertFalse(verify_trail.ed25519_holds(key, b"", signature))


class P256Signatures(unittest.TestCase):
    def test_holds_for_the_known_answers_and_for_no_bit_less(self):
        key = bytes.fromhex(P256_KEY)
        for message, signature in P256:
            signature = bytes.fromhex(signature)
            self.assertTrue(verify_trail.p256_holds(key, message, signature))
            self.assertFalse(verify_trail.p256_holds(key, message + b"x", signature))
            for at in (0, 31, 32, 63):
                self.assertFalse(verify_trail.p256_holds(key, message, _flipped(signature, at)))
            self.assertFalse(verify_trail.p256_holds(key, message, signature[:-1]))
            self.assertFalse(verify_trail.p256_holds(key, message, signature + b"\0"))

    def test_does_not_hold_with_r_or_s_out_of_range(self):
        key = bytes.fromhex(P256_KEY)
        message, signature = P256[1][0], bytes.fromhex(P256[1][1])
        r, s = signature[:32], signature[32:]
        n = verify_trail.P256_N
        for bad in (0, n, n + 1, 2**256 - 1):
            coded = bad.to_bytes(32, "big")
            self.assertFalse(verify_trail.p256_holds(key, message, coded + s))
            self.assertFalse(verify_trail.p256_holds(key, message, r + coded))

    def test_knows_what_is_no_point(self):
        message, signature = P256[0][0], bytes.fromhex(P256[0][1])
        key = bytes.fromhex(P256_KEY)
        x, y = key[1:33], key[33:]
        over = verify_trail.P256_P.to_bytes(32, "big")
        for bad in (b"\x02" + x, b"\x04" + x + x, b"\x04" + over + y, b"\x06" + x + y, b"\x04" + bytes(64), key[:-1]):
            self.assertFalse(verify_trail.p256_holds(bad, message, signature))

    def test_adds_a_point_to_itself_and_to_its_opposite(self):
        x, y, z = verify_trail.P256_G
        opposite = (x, verify_trail.P256_P - y, z)
        self.assertEqual(verify_trail._p256_add((x, y, z), opposite)[2], 0)
        n = verify_trail.P256_N
        self.assertEqual(verify_trail._p256_sum(n - 1, 1, (x, y, z))[2], 0)
        self.assertEqual(verify_trail._p256_sum(n - 5, 5, (x, y, z))[2], 0)


class Form(unittest.TestCase):
    def test_orders_names_by_utf_16_code_units(self):
        # RFC 8785 section 3.2.3.
        text = (
            '{"\\u20ac":"Euro Sign","\\r":"Carriage Return","\\ufb33":"Hebrew Letter Dalet With Dagesh","1":"One",'
            '"\\ud83d\\ude00":"Emoji: Grinning Face","\\u0080":"Control","\\u00f6":"Latin Small Letter O With Diaeresis"}'
        )
        names = list(json.loads(verify_trail.form(verify_trail.read_json(text))))
        self.assertEqual(names, ["\r", "1", "\u0080", "\u00f6", "\u20ac", "\U0001f600", "\ufb33"])

    def test_writes_strings_as_ecmascript_does(self):
        # RFC 8785 section 3.2.2.2, and every control character.
        text = '{"string":"\\u20ac$\\u000F\\u000aA\'\\u0042\\u0022\\u005c\\\\\\"\\/"}'
        said = verify_trail.form(verify_trail.read_json(text))
        self.assertEqual(said, '{"string":"€$\\u000f\\nA\'B\\"\\\\\\\\\\"/"}')
        short = {8: "\\b", 9: "\\t", 10: "\\n", 12: "\\f", 13: "\\r"}
        for code in range(32):
            self.assertEqual(verify_trail.form(chr(code)), '"%s"' % short.get(code, "\\u%04x" % code))
        self.assertEqual(verify_trail.form("\x7f\u2028/"), '"\x7f\u2028/"')

    def test_has_no_form_for_other_numbers(self):
        for number in ("1.5", "1e2", "9007199254740992", "-9007199254740992", "9" * 5000):
            with self.assertRaises(ValueError):
                verify_trail.form(verify_trail.read_json(number))
        self.assertEqual(verify_trail.form(verify_trail.read_json("-9007199254740991")), "-9007199254740991")


class Base64Url(unittest.TestCase):
    def test_reads_only_what_it_would_write(self):
        self.assertEqual(verify_trail.bytes_of("_-8"), b"\xff\xef")
        for bad in ("_-9", "_-8=", "_-8\n", "/+8", "A", "AAAAA", "é", " _-8"):
            self.assertIsNone(verify_trail.bytes_of(bad), bad)


class Times(unittest.TestCase):
    # Leap years of the calendar, and the form of RFC 3339, section 5.6.
    def test_are_only_those_that_there_were(self):
        for good in ("2028-02-29T23:59:59Z", "2000-02-29T00:00:00.1Z", "0000-02-29T00:00:00.123Z"):
            self.assertTrue(verify_trail._is_time(good), good)
        for bad in (
            "2026-02-29T00:00:00Z",
            "2100-02-29T00:00:00Z",
            "2026-02-30T00:00:00Z",
            "2026-04-31T00:00:00Z",
            "2026-13-01T00:00:00Z",
            "2026-00-01T00:00:00Z",
            "2026-01-00T00:00:00Z",
            "2026-01-01T24:00:00Z",
            "2026-01-01T00:60:00Z",
            "2026-12-31T23:59:60Z",
            "2026-01-01T00:00:00.1234Z",
            "2026-01-01T00:00:00+00:00",
            "2026-01-01T00:00:00Z\n",
            "２０２６-01-01T00:00:00Z",
        ):
            self.assertFalse(verify_trail._is_time(bad), bad)


class HostileFiles(unittest.TestCase):
    MARK = b'{"body":{"format":"witnessmark-trail"%s},"publicKey":"","signature":""}'

    def _run(self, data):
        with tempfile.TemporaryDirectory() as folder:
            path = os.path.join(folder, "trail \x1b[31m.json")
            with open(path, "wb") as file:
                file.write(data)
            done = subprocess.run(
                [sys.executable, "-B", COMMAND, path], capture_output=True, env={**os.environ, "PYTHONIOENCODING": "ascii"}
            )
        self.assertEqual(done.stderr, b"")
        self.assertNotIn(b"\x1b", done.stdout)
        return done.returncode, done.stdout.split(b":")[0].decode("ascii")

    def test_are_broken_or_no_trail_and_never_a_traceback(self):
        broken = [
            b',"a":' + b"[" * 200_000,
            b',"a":' + b'{"a":' * 100_000 + b"1" + b"}" * 100_000,
            b',"a":' + b"[" * 70 + b"]" * 70,
            b',"a":"\xff"',
            b',"a":NaN',
            b',"a":-Infinity',
            b',"a":' + b"9" * 100_000,
            b',"a":1e999',
            b',"a":0.5',
            b',"a":-0',
            b',"a":1,"a":1',
            b',"a":"\\ud800"',
            b',"a":"\\u00e9"',
            ',"a":"e\u0301"'.encode(),
            b',"a":"\x00"',
            b"",
        ]
        for part in broken:
            self.assertEqual(self._run(self.MARK.replace(b"%s", part)), (1, "Broken"), part[:40])
        whole = self.MARK.replace(b"%s", b"")
        self.assertEqual(self._run(b"\xef\xbb\xbf" + whole), (1, "Broken"))
        for data in (b"", b"\xff\xfe", b"{}", b"[]", b"null", b"NaN", b"[" * 100_000, b'{"body":[]}', b'{"body":{"format":1}}'):
            self.assertEqual(self._run(data), (2, "Not a trail"), data[:40])

    def test_a_question_that_cannot_be_answered_is_said_so(self):
        for arguments in ([], ["nowhere.json"], ["."], ["a", "b"], ["a", "--key", "short"], ["a", "--colour"]):
            done = subprocess.run([sys.executable, "-B", COMMAND, *arguments], capture_output=True)
            self.assertEqual(done.returncode, 2, arguments)
            self.assertNotIn(b"Traceback", done.stderr)


def _flipped(data, at):
    changed = bytearray(data)
    changed[at] ^= 1
    return bytes(changed)


if __name__ == "__main__":
    unittest.main()
