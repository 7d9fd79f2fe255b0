using System.Text;
using CsCheck;

namespace StreamLogit.Engine.Tests.Records;

/// <summary>Makes records: well-formed ones with unusual parts in unusual places, and ones with some bytes changed.</summary>
internal static class RecordTexts
{
    private static readonly Gen<string> Space = Gen.Frequency((8, Gen.Const("")), (1, Gen.OneOf(" ", "\t", "\r\n", "  ")));

    private static readonly Gen<string> Key = Gen.Frequency(
        (6, Gen.OneOf("id", "time", "label", "weight", "amount", "country", "floor", "payment")),
        (3, Gen.OneOf("fee", "card", "kind", "payment.fee", "payment.card.kind", "x", "y", "note", "a-rather-long-name-of-a-key", "")),
        (2, Gen.OneOf("\\u0069d", "t\\u0069me", "\\u0078", "a\\nb", "caf\\u00e9", "café", "\\ud83d\\ude00", "😀", "amoun\\u0074", "\\ud800")));

    private static readonly Gen<string> Number = Gen.Frequency(
        (3, Gen.Int[-1000, 1000].Select(value => value.ToString(System.Globalization.CultureInfo.InvariantCulture))),
        (3, Gen.Double.Where(double.IsFinite).Select(value => value.ToString("R", System.Globalization.CultureInfo.InvariantCulture))),
        (2, Gen.OneOf("0", "1", "-0", "1.0", "1e0", "10e-1", "0.1e1", "1e15", "1.0000000000000001e15", "-1e15", "1000000000000001", "1e999", "-1e-999")),
        (1, Gen.OneOf("1e6", "1000000.1", "0.3", "1772352930", "1772352930.1234567", "1772352930123", "9007199254740993", "5e-324", "1e99999999999")));

    private static readonly Gen<string> Text = Gen.Frequency(
        (3, Gen.OneOf("a", "QX", "stolen", "paid", "1", "0", "true", "false", "", "2026-03-01T08:15:30Z", "2026-03-01T08:15:30.1234567+02:00")),
        (2, Gen.OneOf("1e0", "2024-02-30T00:00:00Z", "2016-12-31T23:59:60Z", "2026-03-01t08:15:30z", "2026-03-01T08:15:30", "\\u0031", "st\\u006flen")),
        (2, Gen.OneOf("é", "€uro", "😀", "\\ud83d\\ude00", "\\u0000", "a\\\\b", "a\\\"b\\/c", "\\b\\f\\n\\r\\t", "\\udc00", "\\ud800x", "\\ud83d\\u0041")),
        (1, Gen.Char['a', 'z'].Array[0, 40].Select(letters => new string(letters))),
        (1, Gen.Char[' ', '~'].Array[0, 20].Select(letters => new string(letters).Replace("\\", "\\\\").Replace("\"", "\\\""))));

    private static readonly Gen<string> Scalar = Gen.Frequency(
        (4, Number), (4, Text.Select(text => $"\"{text}\"")), (1, Gen.OneOf("null", "true", "false")));

    /// <summary>Members that make most records usable.</summary>
    private static readonly Gen<string> UsualMembers = Gen.Select(
        Gen.OneOf("\"id\":\"t-81\"", "\"id\":17", "\"id\":\"caf\\u00e9\""),
        Gen.OneOf("\"time\":\"2026-03-01T08:15:30.120Z\"", "\"time\":\"1969-12-31T23:59:59.9999999-00:30\"", "\"time\":1772352930.25"),
        Gen.Frequency((2, Gen.Const("")), (1, Gen.OneOf(",\"label\":1", ",\"label\":\"paid\"", ",\"label\":false", ",\"label\":0.0", ",\"label\":null"))),
        Gen.Frequency((3, Gen.Const("")), (1, Gen.OneOf(",\"weight\":2.5", ",\"weight\":0"))),
        Gen.Frequency((1, Gen.Const("")), (3, Gen.OneOf(",\"amount\":41.5", ",\"amount\":null", ",\"amount\":-7e3"))),
        Gen.Frequency((2, Gen.Const("")), (3, Gen.OneOf(",\"country\":\"QX\"", ",\"country\":3.10", ",\"country\":true", ",\"country\":\"\\u0051X\""))),
        (id, time, label, weight, amount, country) => id + "," + time + label + weight + amount + country);

    /// <summary>Objects that are well-formed, with any members.</summary>
    public static Gen<byte[]> WellFormed { get; } = Gen.Frequency(
        (1, Members(3)),
        (4, Gen.Select(UsualMembers, Members(3), (usual, more) => more.Length == 0 ? usual : usual + "," + more)))
        .Select(members => Encoding.UTF8.GetBytes("{" + members + "}"));

    /// <summary>Objects with a few bytes put in, left out, changed, doubled or cut off.</summary>
    public static Gen<byte[]> Mutated { get; } = Gen.Select(WellFormed, Change.Array[1, 4], (record, changes) => changes.Aggregate(record, Apply));

    private static Gen<string> Value(int depth) => depth == 0
        ? Scalar
        : Gen.Frequency(
            (6, Scalar),
            (1, Members(depth - 1).Select(members => "{" + members + "}")),
            (1, Value(depth - 1).Array[0, 3].Select(items => "[" + string.Join(',', items) + "]")));

    private static Gen<string> Members(int depth) => Gen.Select(Key, Space, Space, Value(depth), Space, (key, before, middle, value, after) =>
        $"{before}\"{key}\"{middle}:{middle}{value}{after}").Array[0, 5].Select(members => string.Join(',', members));

    private static Gen<(int Kind, int Place, byte Byte)> Change => Gen.Select(
        Gen.Int[0, 6],
        Gen.Int[0, int.MaxValue],
        Gen.Frequency((2, Gen.Byte), (3, Gen.OneOf("{}[]:,\"\\/ \t\n0123456789-+.eEunlltrfas\0\u001f"u8.ToArray()))));

    private static byte[] Apply(byte[] record, (int Kind, int Place, byte Byte) change)
    {
        if (record.Length == 0) return record;
        int place = change.Place % record.Length;
        switch (change.Kind)
        {
            case 0:
            case 1:
                record = [.. record];
                record[place] = change.Byte;
                return record;
            case 2: return [.. record[..place], change.Byte, .. record[place..]];
            case 3: return [.. record[..place], .. record[(place + 1)..]];
            case 4: return [.. record[..place], .. record[place..Math.Min(record.Length, place + change.Byte % 40)], .. record[place..]];
            case 5: return [.. record[..place], .. record[Math.Min(record.Length, place + change.Byte % 40)..]];
            default: return record[..place];
        }
    }
}
