#!/usr/bin/env python3
"""Checks an exported trail of Witnessmark, with nothing but Python's own library.

    python3 verify_trail.py FILE [--head HASH] [--key FINGERPRINT] [--photographs FOLDER]

It was written from the section "The trail, exactly" of DEVELOPERS.md and shares no code with the program, so
that an error in one is not an error in both. Its parts follow that section: the form, the signatures, the
kinds of field, the checks in their order, the command. The exit code is 0 for a whole trail, 1 for a broken
one, 2 for a file that is no trail or a question that can't be answered.
"""

import argparse
import base64
import hashlib
import hmac
import json
import os
import re
import sys
import unicodedata

FORMAT = "witnessmark-trail"
MARK = b'"format":"witnessmark-trail"'
LARGEST = 2**53 - 1
DEEPEST = 64
NO_HASH = "0" * 64
SERVERS_FIELDS = ("clockOffsetMs", "conflict", "pin", "prev", "recordedAt", "seq")
SERVERS_KINDS = ("refused", "tablet-lost", "restored", "erased")


class Broken(Exception):
    """Where a trail is broken, and why."""

    def __init__(self, place, why):
        super().__init__(place, why)
        self.place = place
        self.why = why


class NotATrail(Exception):
    """Why a file is no trail."""


# --- The form: RFC 8785 over strings, whole numbers, true, false and null ------------------------------------


def read_json(text):
    """Parses JSON so that `form` of it is RFC 8785; a number that may not be there becomes one without a form."""
    return json.loads(
        text,
        object_pairs_hook=_read_object,
        parse_int=_read_integer,
        parse_float=lambda _: float("nan"),
        parse_constant=_refuse_constant,
    )


def form(value):
    """The RFC 8785 text of a value whose objects have their names in order; ValueError where it has none.

    Python writes strings as ECMAScript does if told not to keep to ASCII: a backslash before quotation mark and
    backslash, the five short escapes, lower-case \\u00xx for the other control characters, the rest as it is.
    """
    return json.dumps(value, ensure_ascii=False, allow_nan=False, separators=(",", ":"))


def hash_of(value):
    """The hash of a value: SHA-256 of its form, as lower-case hex."""
    return hashlib.sha256(form(value).encode("utf-8")).hexdigest()


def _read_object(pairs):
    """An object with its names in the order of their UTF-16 code units; of a name that comes twice, the last."""
    if all(name.isascii() for name, _ in pairs):
        return dict(sorted(pairs, key=lambda pair: pair[0]))
    return dict(sorted(pairs, key=lambda pair: pair[0].encode("utf-16-be", "surrogatepass")))


def _read_integer(digits):
    """A whole number of the allowed range; long ones aren't even converted, which would take long."""
    if len(digits) <= 17:
        number = int(digits)
        if -LARGEST <= number <= LARGEST:
            return number
    return float("nan")


def _refuse_constant(name):
    raise ValueError(name + " is not JSON")


def _flaw_of(value, left=DEEPEST):
    """What keeps a parsed value from being signed: nesting, or strings that aren't in form NFC; else None."""
    if isinstance(value, str):
        return None if value.isascii() or _is_nfc(value) else "a text in it is not in Unicode form NFC"
    if not isinstance(value, (dict, list)):
        return None
    if left == 0:
        return "it is nested more than %d deep" % DEEPEST
    if isinstance(value, dict):
        for name in value:
            if not name.isascii() and not _is_nfc(name):
                return "a name in it is not in Unicode form NFC"
        value = value.values()
    for part in value:
        if isinstance(part, (str, dict, list)):
            flaw = _flaw_of(part, left - 1)
            if flaw is not None:
                return flaw
    return None


def _is_nfc(text):
    return unicodedata.is_normalized("NFC", text)


# --- Signatures: ECDSA on P-256 (FIPS 186-5, SEC 1) and Ed25519 (RFC 8032), in whole numbers ------------------
#
# Nothing here is secret, so nothing is done in constant time.

P256_P = 2**256 - 2**224 + 2**192 + 2**96 - 1
P256_N = 0xFFFFFFFF00000000FFFFFFFFFFFFFFFFBCE6FAADA7179E84F3B9CAC2FC632551
P256_B = 0x5AC635D8AA3A93E7B3EBBD55769886BC651D06B0CC53B0F63BCE3C3E27D2604B
P256_G = (
    0x6B17D1F2E12C4247F8BCE6E563A440F277037D812DEB33A0F4A13945D898C296,
    0x4FE342E2FE1A7F9B8EE7EB4A7C0F9E162BCE33576B315ECECBB6406837BF51F5,
    1,
)
P256_NOWHERE = (1, 1, 0)


def p256_holds(public_key, message, signature):
    """Whether r and s, 32 bytes each, sign SHA-256 of the message for the key `04 x y`."""
    if len(public_key) != 65 or public_key[0] != 4 or len(signature) != 64:
        return False
    x = int.from_bytes(public_key[1:33], "big")
    y = int.from_bytes(public_key[33:], "big")
    if x >= P256_P or y >= P256_P or (y * y - (x * x * x - 3 * x + P256_B)) % P256_P != 0:
        return False
    r = int.from_bytes(signature[:32], "big")
    s = int.from_bytes(signature[32:], "big")
    if not (0 < r < P256_N and 0 < s < P256_N):
        return False
    digest = int.from_bytes(hashlib.sha256(message).digest(), "big")
    inverse = pow(s, -1, P256_N)
    point = _p256_sum(digest * inverse % P256_N, r * inverse % P256_N, (x, y, 1))
    if point[2] == 0:
        return False
    return point[0] * pow(point[2] * point[2], -1, P256_P) % P256_P % P256_N == r


def _p256_sum(first, second, key):
    """first * G + second * key, both at one go, bit by bit."""
    both = _p256_add(P256_G, key)
    choices = (None, P256_G, key, both)
    point = P256_NOWHERE
    for bit in range(max(first.bit_length(), second.bit_length()) - 1, -1, -1):
        point = _p256_double(point)
        chosen = choices[(first >> bit & 1) | (second >> bit & 1) << 1]
        if chosen is not None:
            point = _p256_add(point, chosen)
    return point


def _p256_double(point):
    """Twice a point in Jacobian coordinates (x / z^2, y / z^3), for a curve with a = -3."""
    x, y, z = point
    if z == 0 or y == 0:
        return P256_NOWHERE
    zz = z * z % P256_P
    yy = y * y % P256_P
    middle = 4 * x * yy % P256_P
    slope = 3 * (x - zz) * (x + zz) % P256_P
    doubled = (slope * slope - 2 * middle) % P256_P
    return (doubled, (slope * (middle - doubled) - 8 * yy * yy) % P256_P, 2 * y * z % P256_P)


def _p256_add(one, other):
    """The sum of two points in Jacobian coordinates, the same point and opposite ones included."""
    x1, y1, z1 = one
    x2, y2, z2 = other
    if z1 == 0:
        return other
    if z2 == 0:
        return one
    zz1 = z1 * z1 % P256_P
    zz2 = z2 * z2 % P256_P
    u1 = x1 * zz2 % P256_P
    s1 = y1 * zz2 * z2 % P256_P
    across = (x2 * zz1 - u1) % P256_P
    up = (y2 * zz1 * z1 - s1) % P256_P
    if across == 0:
        return _p256_double(one) if up == 0 else P256_NOWHERE
    square = across * across % P256_P
    cube = square * across % P256_P
    corner = u1 * square % P256_P
    x3 = (up * up - cube - 2 * corner) % P256_P
    return (x3, (up * (corner - x3) - s1 * cube) % P256_P, z1 * z2 * across % P256_P)


ED_P = 2**255 - 19
ED_L = 2**252 + 27742317777372353535851937790883648493
ED_D = -121665 * pow(121666, -1, ED_P) % ED_P
ED_ROOT_OF_MINUS_ONE = pow(2, (ED_P - 1) // 4, ED_P)


def ed25519_holds(public_key, message, signature):
    """Whether an Ed25519 signature holds: R is exactly the form of S * B - k * A, and S is below the order."""
    if len(public_key) != 32 or len(signature) != 64:
        return False
    key = _ed_point(public_key)
    s = int.from_bytes(signature[32:], "little")
    if key is None or s >= ED_L:
        return False
    k = int.from_bytes(hashlib.sha512(signature[:32] + public_key + message).digest(), "little") % ED_L
    x, y, z, t = key
    point = _ed_sum(s, k, (ED_P - x, y, z, ED_P - t))
    inverse = pow(point[2], -1, ED_P)
    x, y = point[0] * inverse % ED_P, point[1] * inverse % ED_P
    return (y | (x & 1) << 255).to_bytes(32, "little") == signature[:32]


def _ed_point(coded):
    """The point of 32 bytes by RFC 8032 section 5.1.3, as (x, y, z, t) with t = xy/z; None if there is none."""
    y = int.from_bytes(coded, "little")
    odd, y = y >> 255, y & (2**255 - 1)
    if y >= ED_P:
        return None
    square = (y * y - 1) * pow(ED_D * y * y + 1, -1, ED_P) % ED_P
    x = pow(square, (ED_P + 3) // 8, ED_P)
    if (x * x - square) % ED_P != 0:
        x = x * ED_ROOT_OF_MINUS_ONE % ED_P
    if (x * x - square) % ED_P != 0 or (x == 0 and odd == 1):
        return None
    if x & 1 != odd:
        x = ED_P - x
    return (x, y, 1, x * y % ED_P)


def _ed_sum(first, second, key):
    """first * B + second * key, both at one go, bit by bit."""
    choices = (None, ED_B, key, _ed_add(ED_B, key))
    point = (0, 1, 1, 0)
    for bit in range(max(first.bit_length(), second.bit_length()) - 1, -1, -1):
        point = _ed_add(point, point)
        chosen = choices[(first >> bit & 1) | (second >> bit & 1) << 1]
        if chosen is not None:
            point = _ed_add(point, chosen)
    return point


def _ed_add(one, other):
    """The sum of any two points of the curve, by the complete formulas of RFC 8032 section 5.1.4."""
    x1, y1, z1, t1 = one
    x2, y2, z2, t2 = other
    a = (y1 - x1) * (y2 - x2) % ED_P
    b = (y1 + x1) * (y2 + x2) % ED_P
    c = 2 * ED_D * t1 * t2 % ED_P
    d = 2 * z1 * z2 % ED_P
    e, f, g, h = b - a, d - c, d + c, b + a
    return (e * f % ED_P, g * h % ED_P, f * g % ED_P, e * h % ED_P)


ED_B = _ed_point((4 * pow(5, -1, ED_P) % ED_P).to_bytes(32, "little"))


def bytes_of(text):
    """The bytes of base64url without padding; None unless it is exactly how those bytes are written."""
    if re.fullmatch(r"[A-Za-z0-9_-]*", text) is None or len(text) % 4 == 1:
        return None
    decoded = base64.urlsafe_b64decode(text + "=" * (-len(text) % 4))
    return decoded if base64.urlsafe_b64encode(decoded).rstrip(b"=").decode("ascii") == text else None


# --- The kinds of field --------------------------------------------------------------------------------------


def _is_text(value):
    return isinstance(value, str)


def _is_text_up_to(most):
    """A text that is not empty and has at most so many code points."""
    return lambda value: isinstance(value, str) and 0 < len(value) <= most


def _is_whole(value):
    return isinstance(value, int) and not isinstance(value, bool)


def _is_count(value):
    return _is_whole(value) and value >= 0


def _is_number(value):
    return _is_whole(value) and value >= 1


def _is_object(value):
    return isinstance(value, dict)


def _is_list(value):
    return isinstance(value, list)


def _is_full_list(value):
    return isinstance(value, list) and value != []


def _is_list_of(check):
    return lambda value: isinstance(value, list) and all(check(one) for one in value)


def _is_record_of(kinds):
    """An object with just these fields."""
    return lambda value: isinstance(value, dict) and _flaw_in_fields(value, kinds) is None


def _is_id(value):
    """A UUID in lower case."""
    form_of_id = r"[0-9a-f]{8}-[0-9a-f]{4}-[1-8][0-9a-f]{3}-[89ab][0-9a-f]{3}-[0-9a-f]{12}"
    return isinstance(value, str) and re.fullmatch(form_of_id, value) is not None


def _is_hash(value):
    return isinstance(value, str) and re.fullmatch(r"[0-9a-f]{64}", value) is not None


def _is_key_name(value):
    return isinstance(value, str) and re.fullmatch(r"[0-9a-f]{16}", value) is not None


def _is_salt(value):
    return isinstance(value, str) and re.fullmatch(r"(?:[0-9a-f]{2}){16,64}", value) is not None


def _is_time(value):
    """RFC 3339 in UTC with up to three decimals, on a day that there was."""
    form_of_time = r"([0-9]{4})-([0-9]{2})-([0-9]{2})T([0-9]{2}):([0-9]{2}):([0-9]{2})(?:\.[0-9]{1,3})?Z"
    found = re.fullmatch(form_of_time, value) if isinstance(value, str) else None
    if found is None:
        return False
    year, month, day, hour, minute, second = (int(part) for part in found.groups())
    is_leap = year % 4 == 0 and (year % 100 != 0 or year % 400 == 0)
    days = (31, 29 if is_leap else 28, 31, 30, 31, 30, 31, 31, 30, 31, 30, 31)
    return 1 <= month <= 12 and 1 <= day <= days[month - 1] and hour < 24 and minute < 60 and second < 60


def _or_null(check):
    return lambda value: value is None or check(value)


def _is_one_of(*allowed):
    # By kind as well: Python holds True and 1 to be equal.
    return lambda value: any(type(value) is type(one) and value == one for one in allowed)


FILE = {"body": _is_object, "publicKey": _is_text, "signature": _is_text}
BODY = {
    "v": _is_one_of(1),
    "format": _is_one_of(FORMAT),
    "exportedAt": _is_time,
    "job": _is_record_of({"id": _is_text, "number": _is_text}),
    "plans": _is_list_of(_is_object),
    "entries": _is_full_list,
    "keys": _is_list,
    "workshop": _is_list,
    "heads": _is_list,
    "workshopKeys": _is_full_list,
    "identity": _is_object,
    "photographs": _is_list,
}
ITEM = {
    "recorded": _is_object,
    "hash": _is_hash,
    "signature": _or_null(_is_text),
    "key": _or_null(_is_key_name),
}
ENTRY = {
    "v": _is_one_of(1),
    "id": _is_id,
    "job": _is_id,
    "plan": _is_hash,
    "basis": _is_count,
    "workshop": _is_count,
    "kind": _is_text,
    "by": _is_text_up_to(60),
    "author": _is_record_of({"name": _is_text_up_to(120), "roles": _is_list_of(_is_text_up_to(40))}),
    "with": _is_list_of(_is_text_up_to(60)),
    "device": _is_text_up_to(60),
    "deviceSeq": _is_number,
    "at": _is_time,
    "data": _is_object,
    "seq": _is_number,
    "recordedAt": _is_time,
    "prev": _is_hash,
    "clockOffsetMs": _is_whole,
}
ENTRY_MAY = {
    "step": _is_text_up_to(120),
    "afterwards": _is_record_of({"when": _is_text_up_to(60), "reason": _is_text_up_to(2000)}),
    "pin": _is_object,
    "conflict": _is_object,
}
WORKSHOP_ITEM = {"recorded": _is_object, "hash": _is_hash}
WORKSHOP_ENTRY = {"seq": _is_number, "prev": _is_hash, "kind": _is_text, "data": _is_object}
KEY = {
    "id": _is_key_name,
    "person": _is_text,
    "device": _is_text,
    "publicKey": _is_text,
    "workshop": _is_number,
}
HEAD = {
    "trail": _is_text,
    "seq": _is_number,
    "hash": _is_hash,
    "at": _is_time,
    "key": _is_hash,
    "signature": _is_text,
}
WORKSHOP_KEY = {
    "key": _is_hash,
    "publicKey": _is_text,
    "since": _is_time,
    "signedBefore": _or_null(_is_text),
}
IDENTITY = {"value": _is_text, "salt": _is_salt}
PHOTOGRAPH = {"hash": _is_hash, "bytes": _is_count, "state": _is_one_of("kept", "missing", "erased")}


def _flaw_in_fields(value, kinds, may=None, others=False):
    """The first field that is missing, is not of its kind or does not belong there, in words; else None."""
    for name, check in kinds.items():
        if name not in value:
            return "“%s” is missing" % name
        if not check(value[name]):
            return "“%s” is not as it must be" % name
    for name in value:
        if name in kinds or others:
            continue
        if may is None or name not in may:
            return "“%s” does not belong there" % name
        if not may[name](value[name]):
            return "“%s” is not as it must be" % name
    return None


def _require(value, kinds, where, place="the file", may=None, others=False):
    """Every field is there and of its kind, and no others are unless they are allowed."""
    if not isinstance(value, dict):
        raise Broken(place, "In the list is something that is no object: %s." % where)
    flaw = _flaw_in_fields(value, kinds, may, others)
    if flaw is not None:
        raise Broken(place, "In %s %s." % (where, flaw))


# --- The checks, in their order ------------------------------------------------------------------------------


class Report:
    """What was found: `outcome` is "whole", "broken" or "not a trail"; for a broken one, where and why."""

    def __init__(self, outcome, place=None, why=None, notes=()):
        self.outcome = outcome
        self.place = place
        self.why = why
        self.notes = list(notes)


def verify(data, head=None, key=None, photographs=None):
    """Checks the bytes of an exported trail, and beside it what the reader knows from elsewhere."""
    try:
        exported = _read_file(data)
        body = exported["body"]
        notes = []
        _check_workshop_keys(exported)
        _check_entries(body)
        _check_workshop(body)
        _check_keys(body)
        _check_signatures(body)
        _check_heads(body)
        notes += _check_identity(body)
        notes += _check_photographs(body)
        _check_export(exported)
        notes += _compare_key(body, key)
        notes += _compare_head(body, head)
        if photographs is not None:
            notes += _compare_photographs(body, photographs)
        return Report("whole", notes=notes)
    except Broken as broken:
        return Report("broken", broken.place, broken.why)
    except NotATrail as why:
        return Report("not a trail", why=str(why))


def _read_file(data):
    """Step 1: the bytes are the form of what they say, and every field is of its kind."""
    try:
        text = data.decode("utf-8")
        exported = read_json(text)
    except (ValueError, RecursionError):
        if MARK in data:
            raise Broken("the file", "It can't be read: something in it was changed or is missing.") from None
        raise NotATrail("It is not a file that Witnessmark exports.") from None
    body = exported.get("body") if isinstance(exported, dict) else None
    if not isinstance(body, dict) or body.get("format") != FORMAT:
        raise NotATrail("It is not a file that Witnessmark exports.")
    flaw = _flaw_of(exported)
    if flaw is not None:
        raise Broken("the file", "It can't be as it was signed: %s." % flaw)
    try:
        is_form = form(exported) == text
    except ValueError:
        raise Broken("the file", "A number in it is not a whole number of the allowed size.") from None
    if not is_form:
        raise Broken("the file", "It is not written as it was signed: something was added, moved or rewritten.")
    _require_kinds(exported)
    return exported


def _require_kinds(exported):
    _require(exported, FILE, "the file")
    body = exported["body"]
    _require(body, BODY, "the body")
    for at, item in enumerate(body["entries"], 1):
        place = "entry %d" % at
        _require(item, ITEM, "what the file says of it", place)
        _require(item["recorded"], ENTRY, "what was recorded", place, ENTRY_MAY)
    for at, item in enumerate(body["workshop"], 1):
        where = "item %d of “workshop”" % at
        _require(item, WORKSHOP_ITEM, where)
        _require(item["recorded"], WORKSHOP_ENTRY, where, others=True)
    for name, kinds in (("keys", KEY), ("heads", HEAD), ("workshopKeys", WORKSHOP_KEY), ("photographs", PHOTOGRAPH)):
        for at, one in enumerate(body[name], 1):
            _require(one, kinds, "item %d of “%s”" % (at, name))
    for field, one in body["identity"].items():
        if one not in ("erased", "withheld"):
            _require(one, IDENTITY, "“%s” of “identity”" % field)


def _check_workshop_keys(exported):
    """Step 2: each key of the workshop is signed by the one before it, and the last is the present one."""
    seen = set()
    before = None
    for one in exported["body"]["workshopKeys"]:
        place = "the workshop's key %s" % one["key"]
        raw = bytes_of(one["publicKey"])
        if raw is None or hashlib.sha256(raw).hexdigest() != one["key"]:
            raise Broken(place, "The fingerprint is not that of the key.")
        if one["key"] in seen:
            raise Broken(place, "It is there twice.")
        seen.add(one["key"])
        if (before is None) != (one["signedBefore"] is None):
            raise Broken(place, "Only the first key goes without the signature of the one before it.")
        if before is not None:
            said = form({"before": before["key"], **_pick(one, "key", "publicKey", "since")})
            if not _workshop_signed(before["publicKey"], said, one["signedBefore"]):
                raise Broken(place, "It was not signed by the key before it.")
        before = one
    if before["publicKey"] != exported["publicKey"]:
        raise Broken("the workshop's key", "The key of this file is not the last one that the workshop signed with.")


def _workshop_signed(public_key, message, signature):
    """Whether an Ed25519 signature of the workshop holds; both are base64url."""
    key, signed = bytes_of(public_key), bytes_of(signature)
    return key is not None and signed is not None and ed25519_holds(key, message.encode("utf-8"), signed)


def _check_entries(body):
    """Step 3: the chain of the entries."""
    plans = {hash_of(plan) for plan in body["plans"]}
    ids = set()
    numbers = {}
    before = NO_HASH
    for at, item in enumerate(body["entries"], 1):
        place = "entry %d" % at
        entry = item["recorded"]
        if entry["seq"] != at:
            raise Broken(place, "Its number is %d: an entry was removed, added or moved." % entry["seq"])
        if entry["job"] != body["job"]["id"]:
            raise Broken(place, "It belongs to another job.")
        if entry["prev"] != before:
            raise Broken(place, "It does not follow the entry before it.")
        if item["hash"] != hash_of(entry):
            raise Broken(place, "Its content is not what its hash says: it was changed.")
        if entry["id"] in ids:
            raise Broken(place, "Another entry has the same id.")
        if entry["plan"] not in plans:
            raise Broken(place, "Its plan is not in the file.")
        if not _is_servers(entry):
            last = numbers.get(entry["device"])
            if last is not None and entry["deviceSeq"] <= last and "conflict" not in entry:
                raise Broken(place, "Its tablet had counted further before it.")
            numbers[entry["device"]] = entry["deviceSeq"] if last is None else max(last, entry["deviceSeq"])
        ids.add(entry["id"])
        before = item["hash"]


def _check_workshop(body):
    """Step 4: the workshop's entries, as far as they are in the file."""
    hashes = {}
    for item in body["workshop"]:
        entry = item["recorded"]
        place = "workshop entry %d" % entry["seq"]
        if item["hash"] != hash_of(entry):
            raise Broken(place, "Its content is not what its hash says: it was changed.")
        if entry["seq"] in hashes:
            raise Broken(place, "It is there twice.")
        hashes[entry["seq"]] = item["hash"]
    for item in body["workshop"]:
        entry = item["recorded"]
        before = NO_HASH if entry["seq"] == 1 else hashes.get(entry["seq"] - 1)
        if before is not None and entry["prev"] != before:
            raise Broken("workshop entry %d" % entry["seq"], "It does not follow the workshop entry before it.")
    for item in body["entries"]:
        number = item["recorded"]["workshop"]
        if number != 0 and number not in hashes:
            place = "entry %d" % item["recorded"]["seq"]
            raise Broken(place, "It names workshop entry %d, which is not in the file." % number)


def _check_keys(body):
    """Step 5: each author's key is the one that the workshop's trail enrolled."""
    enrolled = {item["recorded"]["seq"]: item["recorded"]["data"] for item in body["workshop"]}
    seen = set()
    for one in body["keys"]:
        place = "key %s" % one["id"]
        data = enrolled.get(one["workshop"])
        if data is None:
            raise Broken(place, "The workshop entry that enrolled it is not in the file.")
        said = (data.get("publicKey"), data.get("person"), data.get("tablet"))
        if said != (one["publicKey"], one["person"], one["device"]):
            raise Broken(place, "The workshop's trail enrolled another key, person or tablet.")
        raw = bytes_of(one["publicKey"])
        if raw is None or len(raw) != 65 or hashlib.sha256(raw).hexdigest()[:16] != one["id"]:
            raise Broken(place, "Its name is not that of its bytes.")
        if one["id"] in seen:
            raise Broken(place, "It is there twice.")
        seen.add(one["id"])


def _check_signatures(body):
    """Step 6: every entry is signed by its author, save what the server made."""
    keys = {one["id"]: one for one in body["keys"]}
    for at, item in enumerate(body["entries"], 1):
        place = "entry %d" % at
        entry = item["recorded"]
        if _is_servers(entry):
            if item["signature"] is not None or item["key"] is not None:
                raise Broken(place, "The server made it, and yet it has an author's signature.")
            continue
        if item["signature"] is None or item["key"] is None:
            raise Broken(place, "Its author's signature is missing.")
        key = keys.get(item["key"])
        if key is None:
            raise Broken(place, "The key that signed it is not in the file.")
        if (key["person"], key["device"]) != (entry["by"], entry["device"]):
            raise Broken(place, "The key that signed it is another person's or another tablet's.")
        content = {name: value for name, value in entry.items() if name not in SERVERS_FIELDS}
        message = hash_of(content).encode("ascii")
        signature = bytes_of(item["signature"])
        if signature is None or not p256_holds(bytes_of(key["publicKey"]), message, signature):
            raise Broken(place, "Its author's signature does not hold.")


def _check_heads(body):
    """Step 7: what the workshop signed along the way."""
    chains = {
        body["job"]["id"]: {item["recorded"]["seq"]: item["hash"] for item in body["entries"]},
        "workshop": {item["recorded"]["seq"]: item["hash"] for item in body["workshop"]},
    }
    keys = {one["key"]: one["publicKey"] for one in body["workshopKeys"]}
    for one in body["heads"]:
        place = "the%s head at entry %d" % (" workshop's" if one["trail"] == "workshop" else "", one["seq"])
        if one["trail"] not in chains:
            raise Broken(place, "It is of another trail.")
        found = chains[one["trail"]].get(one["seq"])
        if found is None and one["trail"] != "workshop":
            raise Broken(place, "The entry that it was signed for is not in the file.")
        if found is not None and found != one["hash"]:
            raise Broken(place, "It was signed for another entry than the one in the file.")
        if one["key"] not in keys:
            raise Broken(place, "It was not signed with a key of the workshop.")
        said = form(_pick(one, "at", "hash", "key", "seq", "trail"))
        if not _workshop_signed(keys[one["key"]], said, one["signature"]):
            raise Broken(place, "The workshop's signature does not hold.")


def _check_identity(body):
    """Step 8: who the customer is, against what the opening of the job committed to."""
    opened = next((item["recorded"] for item in body["entries"] if item["recorded"]["kind"] == "opened"), None)
    commitments = {} if opened is None else opened["data"].get("commitments")
    if not isinstance(commitments, dict):
        commitments = {}
    erased = _erased(body, "fields")
    notes = []
    for field in [*commitments, *(name for name in body["identity"] if name not in commitments)]:
        place = "identity: %s" % field
        if field not in commitments:
            raise Broken(place, "The opening of the job does not know this field.")
        if field not in body["identity"]:
            raise Broken(place, "It is missing from the file.")
        one = body["identity"][field]
        if one == "withheld":
            notes.append("%s is withheld." % place)
        elif one == "erased":
            if field not in erased:
                raise Broken(place, "It is said to be erased, and no entry says so.")
            notes.append("%s was erased, and an entry says so." % place)
        else:
            salt, value = bytes.fromhex(one["salt"]), one["value"].encode("utf-8")
            if hmac.new(salt, value, hashlib.sha256).hexdigest() != commitments[field]:
                raise Broken(place, "It is not what the opening of the job committed to.")
    return notes


def _check_photographs(body):
    """Step 9: the list of the photographs, against the entries that took them."""
    named = {}
    for item in body["entries"]:
        entry = item["recorded"]
        if entry["kind"] == "photographed":
            photo = entry["data"].get("photo")
            # Something else than a text can't be in the list, and so is missing from it.
            named[photo if isinstance(photo, str) else form(photo)] = entry["data"].get("bytes")
    erased = _erased(body, "photographs")
    listed = set()
    notes = []
    for one in body["photographs"]:
        place = "photograph %s" % one["hash"]
        if one["hash"] not in named:
            raise Broken(place, "No entry took it.")
        if one["hash"] in listed:
            raise Broken(place, "It is there twice.")
        if not _is_count(named[one["hash"]]) or named[one["hash"]] != one["bytes"]:
            raise Broken(place, "Its number of bytes is not the one in its entry.")
        if one["state"] == "erased":
            if one["hash"] not in erased:
                raise Broken(place, "It is said to be erased, and no entry says so.")
            notes.append("%s was erased, and an entry says so." % place)
        elif one["state"] == "missing":
            notes.append("%s was missing when the trail was exported." % place)
        listed.add(one["hash"])
    for photo in named:
        if photo not in listed:
            raise Broken("photograph %s" % photo, "An entry took it, and it is not in the list.")
    return notes


def _check_export(exported):
    """Step 10: the signature over everything."""
    if not _workshop_signed(exported["publicKey"], hash_of(exported["body"]), exported["signature"]):
        raise Broken("the export's signature", "It does not hold.")


def _compare_key(body, key):
    """Step 11: the workshop's key, against the fingerprint that the reader has from elsewhere."""
    keys = [one["key"] for one in body["workshopKeys"]]
    if key is None:
        return ["Key not compared: the file was signed with %s." % keys[-1]]
    if key not in keys:
        raise Broken("the workshop's key", "The workshop never signed with the key of that fingerprint.")
    return ["The key is the workshop's." if key == keys[-1] else "The key is an earlier one of the workshop's."]


def _compare_head(body, head):
    """Step 12: the last entry that the reader has seen, against the trail."""
    hashes = [item["hash"] for item in body["entries"]]
    if head is None:
        return ["Head not compared."]
    if head not in hashes:
        raise Broken("the head that you hold", "No entry has that hash: the trail was cut short or rewritten.")
    seq = hashes.index(head) + 1
    return ["The head is entry %d; %d came after it." % (seq, len(hashes) - seq)]


def _compare_photographs(body, folder):
    """Step 13: the photographs beside the file."""
    files = {}
    with os.scandir(folder) as found:
        for one in sorted(found, key=lambda one: one.name):
            if one.is_file():
                files.setdefault(one.name.split(".")[0], []).append(one.path)
    notes = []
    for one in body["photographs"]:
        if one["state"] != "kept":
            continue
        paths = files.get(one["hash"], [])
        if not paths:
            notes.append("photograph %s is not in the folder." % one["hash"])
        for path in paths:
            if _file_hash(path) != one["hash"]:
                raise Broken("photograph %s" % one["hash"], "The file in the folder has other bytes.")
    return notes


def _file_hash(path):
    digest = hashlib.sha256()
    with open(path, "rb") as file:
        for piece in iter(lambda: file.read(1 << 20), b""):
            digest.update(piece)
    return digest.hexdigest()


def _is_servers(entry):
    """Whether the server made an entry by itself."""
    return entry["by"] == "workshop" and entry["kind"] in SERVERS_KINDS


def _erased(body, what):
    """What the entries of the server say was erased."""
    names = set()
    for item in body["entries"]:
        entry = item["recorded"]
        if entry["kind"] == "erased" and _is_servers(entry):
            listed = entry["data"].get(what)
            names.update(name for name in (listed if isinstance(listed, list) else []) if isinstance(name, str))
    return names


def _pick(value, *names):
    """These fields alone; the names are given in their order."""
    return {name: value[name] for name in names}


# --- The command ---------------------------------------------------------------------------------------------


def main(arguments=None):
    """Reads the command line, prints what was found and returns the exit code."""
    for stream in (sys.stdout, sys.stderr):
        # A name that the terminal can't show must not stop the verdict.
        stream.reconfigure(errors="backslashreplace")
    asked = _read_arguments(arguments)
    try:
        with open(asked.file, "rb") as file:
            data = file.read()
        report = verify(data, asked.head, asked.key, asked.photographs)
    except OSError as error:
        what = asked.file if error.filename is None else str(error.filename)
        _say(sys.stderr, "%s can't be read: %s." % (what, error.strerror or "no reason was given"))
        return 2
    if report.outcome == "whole":
        _say(sys.stdout, "Whole: %s" % asked.file, *(note[0].upper() + note[1:] for note in report.notes))
        return 0
    if report.outcome == "broken":
        _say(sys.stdout, "Broken: %s" % asked.file, "At %s: %s" % (report.place, report.why))
        return 1
    _say(sys.stdout, "Not a trail: %s" % asked.file, report.why)
    return 2


def _say(stream, *lines):
    """Prints lines; a reader who has seen enough and went away changes nothing about the verdict."""
    try:
        stream.write("".join(_plain(line) + "\n" for line in lines))
        stream.flush()
    except BrokenPipeError:
        # Python would try once more as it ends.
        os.dup2(os.open(os.devnull, os.O_WRONLY), stream.fileno())


def _read_arguments(arguments):
    parser = argparse.ArgumentParser(
        prog="verify_trail.py",
        description="Checks an exported trail of Witnessmark.",
        allow_abbrev=False,
    )
    parser.add_argument("file", metavar="FILE", help="the exported trail")
    parser.add_argument("--head", metavar="HASH", help="the hash of the last entry that you have seen")
    parser.add_argument("--key", metavar="FINGERPRINT", help="the fingerprint of the workshop's key")
    parser.add_argument("--photographs", metavar="FOLDER", help="the folder with the photographs of the trail")
    asked = parser.parse_args(arguments)
    for name, value in (("--head", asked.head), ("--key", asked.key)):
        if value is not None and not _is_hash(value):
            parser.error("%s takes 64 digits, 0 to 9 and a to f." % name)
    if asked.photographs is not None and not os.path.isdir(asked.photographs):
        parser.error("The folder of the photographs is not there.")
    return asked


def _plain(text):
    """A line without signs that would move or colour what a terminal shows."""
    return "".join(sign if sign.isprintable() else "\\u{%x}" % ord(sign) for sign in text)


if __name__ == "__main__":
    sys.exit(main())
