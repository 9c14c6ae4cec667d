"""Verifies a record or a chain with openssl and nothing of ours: python3 verify_record.py FILE KEY.pem"""

import hashlib
import json
import subprocess
import sys
import tempfile


def canonical(value):
    """RFC 8785: keys by UTF-16 code units, numbers as ECMAScript prints them."""
    if isinstance(value, dict):
        keys = sorted(value, key=lambda key: key.encode("utf-16-be"))
        return "{" + ",".join(text(key) + ":" + canonical(value[key]) for key in keys) + "}"
    if isinstance(value, list):
        return "[" + ",".join(canonical(entry) for entry in value) + "]"
    if isinstance(value, str):
        return text(value)
    if value is None or isinstance(value, bool):
        return {None: "null", True: "true", False: "false"}[value]
    return number(float(value))


def text(value):
    return json.dumps(value, ensure_ascii=False)


def number(value):
    if value == 0:
        return "0"
    digits, exponent = f"{value!r}".replace("-", "", 1 if value < 0 else 0), 0
    if "e" in digits:
        digits, power = digits.split("e")
        exponent = int(power)
    whole, _, part = digits.partition(".")
    figures = (whole + part).lstrip("0")
    point = len(whole) + exponent - (len(whole + part) - len(figures))
    figures = figures.rstrip("0")
    sign = "-" if value < 0 else ""
    if len(figures) <= point <= 21:
        return sign + figures + "0" * (point - len(figures))
    if 0 < point <= 21:
        return sign + figures[:point] + "." + figures[point:]
    if -6 < point <= 0:
        return sign + "0." + "0" * -point + figures
    tail = "." + figures[1:] if len(figures) > 1 else ""
    return f"{sign}{figures[0]}{tail}e{'+' if point > 0 else '-'}{abs(point - 1)}"


def is_signed(record, key):
    with tempfile.NamedTemporaryFile() as message, tempfile.NamedTemporaryFile() as signature:
        message.write(canonical(record["body"]).encode())
        signature.write(bytes.fromhex(record["seal"]["signature"]))
        message.flush(), signature.flush()
        command = ["openssl", "pkeyutl", "-verify", "-pubin", "-inkey", key, "-rawin", "-in", message.name, "-sigfile", signature.name]
        return subprocess.run(command, capture_output=True).returncode == 0


def main(path, key):
    with open(path, encoding="utf-8") as file:
        value = json.load(file)
    records = value.get("records", [value])
    head = None
    for index, record in enumerate(records):
        body = record["body"]
        if not is_signed(record, key):
            sys.exit(3)
        if index > 0 and (body["previous"] != head or body["sequence"] != records[index - 1]["body"]["sequence"] + 1):
            sys.exit(3)
        head = hashlib.sha256(canonical(record).encode()).hexdigest()
    print("genuine", head)


main(*sys.argv[1:])
