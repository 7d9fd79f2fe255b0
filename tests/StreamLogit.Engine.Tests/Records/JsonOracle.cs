using System.Globalization;
using System.Numerics;
using System.Text;
using System.Text.Json;
using System.Text.RegularExpressions;
using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Records;

namespace StreamLogit.Engine.Tests.Records;

/// <summary>What a record should be read as, found the plain way: by a document tree, strings, sets and the framework's own dates.</summary>
internal sealed partial class JsonOracle(RecordSchema schema)
{
    private const decimal MicrosecondsPerSecond = 1_000_000;

    private readonly RecordOptions _options = schema.Options;

    public OracleRecord Read(byte[] record)
    {
        if (record.Length > _options.MaximumBytes) return OracleRecord.Reject(RejectReason.TooLong);
        try
        {
            _ = new UTF8Encoding(false, true).GetString(record);
        }
        catch (ArgumentException)
        {
            return OracleRecord.Reject(RejectReason.NotUtf8);
        }
        JsonDocument document;
        try
        {
            document = JsonDocument.Parse(record, new JsonDocumentOptions { MaxDepth = _options.MaximumDepth });
        }
        catch (JsonException)
        {
            // Too deep or broken, whichever comes first.
            return OracleRecord.Reject(IsTooDeepFirst(record) ? RejectReason.TooDeep : RejectReason.NotJson);
        }
        using (document) return Read(document.RootElement);
    }

    private bool IsTooDeepFirst(byte[] record)
    {
        var reader = new Utf8JsonReader(record, new JsonReaderOptions { MaxDepth = _options.MaximumDepth + 1 });
        try
        {
            while (reader.Read())
            {
                if (reader.TokenType is JsonTokenType.StartObject or JsonTokenType.StartArray && reader.CurrentDepth == _options.MaximumDepth) return true;
            }
        }
        catch (JsonException)
        {
            return false;
        }
        throw new InvalidOperationException("The reader and the document disagree.");
    }

    private OracleRecord Read(JsonElement root)
    {
        var problem = FindLoneSurrogate(root) ? RejectReason.NotUtf8
            : root.ValueKind != JsonValueKind.Object ? RejectReason.NotObject
            : HasDuplicate(root) || HasPathTwice(root) ? RejectReason.DuplicateKey
            : RejectReason.None;
        if (problem != RejectReason.None) return OracleRecord.Reject(problem);

        var record = new OracleRecord { Fields = new OracleField[schema.Fields.Length] };
        bool isLabelled = false;
        var reason = First(
            () => ReadId(root, record),
            () => ReadTime(root, record),
            () => ReadLabel(root, record, out isLabelled),
            () => ReadWeight(root, record));
        if (reason != RejectReason.None) return OracleRecord.Reject(reason);
        for (int i = 0; i < schema.Fields.Length; i++)
        {
            reason = ReadField(root, i, record);
            if (reason != RejectReason.None) return OracleRecord.Reject(reason);
        }
        string[] common = [_options.Id, _options.Time, _options.Label, _options.Weight];
        var eventPaths = schema.Fields.Select(field => field.Path).Except(common).ToArray();
        bool isEvent = eventPaths.Length == 0 || eventPaths.Any(path => Find(root, path, out _) is not null);
        record.Kind = !isLabelled ? RecordKind.Event : isEvent ? RecordKind.LabelledEvent : RecordKind.Label;
        return record;
    }

    private static RejectReason First(params Func<RejectReason>[] checks) => checks.Select(check => check()).FirstOrDefault(reason => reason != RejectReason.None);

    private static bool FindLoneSurrogate(JsonElement element)
    {
        try
        {
            return element.ValueKind switch
            {
                JsonValueKind.String => element.GetString() is null,
                JsonValueKind.Array => element.EnumerateArray().Any(FindLoneSurrogate),
                JsonValueKind.Object => element.EnumerateObject().Any(member => member.Name is null || FindLoneSurrogate(member.Value)),
                _ => false,
            };
        }
        catch (InvalidOperationException)
        {
            return true;
        }
    }

    private static bool HasDuplicate(JsonElement element) => element.ValueKind switch
    {
        JsonValueKind.Array => element.EnumerateArray().Any(HasDuplicate),
        JsonValueKind.Object => element.EnumerateObject().Select(member => member.Name).Distinct().Count() < element.EnumerateObject().Count()
            || element.EnumerateObject().Any(member => HasDuplicate(member.Value)),
        _ => false,
    };

    private bool HasPathTwice(JsonElement root)
    {
        string[] paths = [_options.Id, _options.Time, _options.Label, _options.Weight, .. schema.Fields.Select(field => field.Path)];
        return paths.Any(path => path.Contains('.') && root.TryGetProperty(path, out _) && FindNested(root, path, out _) is not null);
    }

    private static JsonElement? Find(JsonElement root, string path, out bool isBlocked)
    {
        isBlocked = false;
        return path.Contains('.') && root.TryGetProperty(path, out var flat) ? flat : FindNested(root, path, out isBlocked);
    }

    /// <summary>Follows a path; blocked is one that something other than an object or null stands in the way of.</summary>
    private static JsonElement? FindNested(JsonElement root, string path, out bool isBlocked)
    {
        isBlocked = false;
        var here = root;
        foreach (string name in path.Split('.'))
        {
            if (here.ValueKind != JsonValueKind.Object)
            {
                isBlocked = here.ValueKind is not JsonValueKind.Null;
                return null;
            }
            if (!here.TryGetProperty(name, out here)) return null;
        }
        return here;
    }

    private RejectReason ReadId(JsonElement root, OracleRecord record)
    {
        var value = Find(root, _options.Id, out bool isBlocked);
        if (isBlocked) return RejectReason.IdUnreadable;
        if (value is not { ValueKind: not JsonValueKind.Null } id) return RejectReason.IdMissing;
        if (id.ValueKind is not (JsonValueKind.String or JsonValueKind.Number)) return RejectReason.IdUnreadable;
        record.Id = TextOf(id);
        return record.Id.Length == 0 ? RejectReason.IdEmpty : RejectReason.None;
    }

    private RejectReason ReadTime(JsonElement root, OracleRecord record)
    {
        var value = Find(root, _options.Time, out bool isBlocked);
        if (isBlocked) return RejectReason.TimeUnreadable;
        if (value is not { ValueKind: not JsonValueKind.Null } time) return RejectReason.TimeMissing;
        bool isRfc3339 = _options.TimeFormat == TimeFormat.Rfc3339;
        if (time.ValueKind != JsonValueKind.String && (isRfc3339 || time.ValueKind != JsonValueKind.Number)) return RejectReason.TimeUnreadable;
        long? microseconds = isRfc3339 ? Rfc3339(TextOf(time)) : Unix(TextOf(time), _options.TimeFormat == TimeFormat.UnixSeconds ? 6 : 3);
        if (microseconds is null) return RejectReason.TimeUnreadable;
        record.TimeMicroseconds = microseconds.Value;
        return RejectReason.None;
    }

    private RejectReason ReadLabel(JsonElement root, OracleRecord record, out bool isLabelled)
    {
        isLabelled = false;
        var value = Find(root, _options.Label, out bool isBlocked);
        if (isBlocked) return RejectReason.LabelNotBinary;
        if (value is not { ValueKind: not JsonValueKind.Null } label) return RejectReason.None;
        isLabelled = true;
        foreach (var (key, meaning) in _options.LabelValues)
        {
            bool isEqual = label.ValueKind switch
            {
                JsonValueKind.String => label.GetString() == key,
                JsonValueKind.True => key == "true",
                JsonValueKind.False => key == "false",
                JsonValueKind.Number => double.TryParse(key, NumberStyles.Float, CultureInfo.InvariantCulture, out double number) && number == NumberOf(label),
                _ => false,
            };
            if (!isEqual) continue;
            record.Label = meaning;
            return RejectReason.None;
        }
        return RejectReason.LabelNotBinary;
    }

    private RejectReason ReadWeight(JsonElement root, OracleRecord record)
    {
        var value = Find(root, _options.Weight, out bool isBlocked);
        if (isBlocked) return RejectReason.WeightOutOfRange;
        if (value is not { ValueKind: not JsonValueKind.Null } weight) return RejectReason.None;
        if (weight.ValueKind != JsonValueKind.Number) return RejectReason.WeightOutOfRange;
        record.Weight = NumberOf(weight);
        return record.Weight is >= 0 and <= 1e6 ? RejectReason.None : RejectReason.WeightOutOfRange;
    }

    private RejectReason ReadField(JsonElement root, int index, OracleRecord record)
    {
        var (path, use) = schema.Fields[index];
        bool isNumber = use.HasFlag(FieldUse.Number);
        var value = Find(root, path, out bool isBlocked);
        if (isBlocked) return isNumber ? RejectReason.NumberUnreadable : RejectReason.CategoryUnreadable;
        if (value is not { ValueKind: not JsonValueKind.Null } field) return RejectReason.None;
        double? number = null;
        if (isNumber)
        {
            if (field.ValueKind != JsonValueKind.Number) return RejectReason.NumberUnreadable;
            number = NumberOf(field);
            if (Math.Abs(number.Value) > 1e15) return RejectReason.NumberOutOfRange;
        }
        string? text = null;
        if (use.HasFlag(FieldUse.Category))
        {
            if (field.ValueKind is JsonValueKind.Object or JsonValueKind.Array) return RejectReason.CategoryUnreadable;
            text = TextOf(field);
        }
        record.Fields[index] = new OracleField(true, number, text);
        return RejectReason.None;
    }

    private static string TextOf(JsonElement element) => element.ValueKind == JsonValueKind.String ? element.GetString()! : element.GetRawText();

    private static double NumberOf(JsonElement element) => double.Parse(element.GetRawText(), NumberStyles.Float, CultureInfo.InvariantCulture);

    [GeneratedRegex(@"^([0-9]{4}-[0-9]{2}-[0-9]{2})[Tt]([0-9]{2}:[0-9]{2}:)([0-9]{2})(?:\.([0-9]+))?(?:[Zz]|([+-])([0-9]{2}):([0-9]{2}))\z")]
    private static partial Regex Rfc3339Pattern();

    private static long? Rfc3339(string text)
    {
        var match = Rfc3339Pattern().Match(text);
        if (!match.Success) return null;
        bool isLeapSecond = match.Groups[3].Value == "60";
        string second = isLeapSecond ? "59" : match.Groups[3].Value;
        string local = match.Groups[1].Value + "T" + match.Groups[2].Value + second;
        if (!DateTime.TryParseExact(local, "yyyy-MM-dd'T'HH:mm:ss", CultureInfo.InvariantCulture, DateTimeStyles.None, out var time)) return null;
        int offset = 0;
        if (match.Groups[5].Success)
        {
            int hours = int.Parse(match.Groups[6].Value, CultureInfo.InvariantCulture), minutes = int.Parse(match.Groups[7].Value, CultureInfo.InvariantCulture);
            if (hours > 23 || minutes > 59) return null;
            offset = (match.Groups[5].Value == "-" ? -60 : 60) * (hours * 60 + minutes);
        }
        long seconds = (time.Ticks - DateTime.UnixEpoch.Ticks) / TimeSpan.TicksPerSecond - offset;
        long fraction = long.Parse((match.Groups[4].Value + "000000")[..6], CultureInfo.InvariantCulture);
        if (isLeapSecond)
        {
            seconds++;
            fraction = 0;
        }
        if (seconds < (DateTime.MinValue - DateTime.UnixEpoch).TotalSeconds || seconds >= 253_402_300_800) return null;
        if (isLeapSecond && DateTime.UnixEpoch.AddSeconds(seconds) is not { Day: 1, TimeOfDay.Ticks: 0 }) return null;
        return seconds * 1_000_000 + fraction;
    }

    private static long? Unix(string text, int exponent)
    {
        var match = Regex.Match(text, @"^(-?)(0|[1-9][0-9]*)(?:\.([0-9]+))?(?:[eE]([+-]?[0-9]+))?\z");
        if (!match.Success) return null;
        var digits = BigInteger.Parse(match.Groups[2].Value + match.Groups[3].Value, CultureInfo.InvariantCulture);
        if (digits.IsZero) return 0;
        var power = exponent - match.Groups[3].Length
            + (match.Groups[4].Success ? BigInteger.Parse(match.Groups[4].Value, NumberStyles.AllowLeadingSign, CultureInfo.InvariantCulture) : 0);
        if (match.Groups[1].Length > 0) digits = -digits;
        if (power > 10_000) return null;
        if (power < -10_000) return digits.Sign < 0 ? -1 : 0;
        var scale = BigInteger.Pow(10, (int)BigInteger.Abs(power));
        var microseconds = power >= 0 ? digits * scale : BigInteger.DivRem(digits, scale, out var rest) - (rest.Sign < 0 ? 1 : 0);
        return microseconds >= (DateTime.MinValue - DateTime.UnixEpoch).Ticks / 10 && microseconds < (BigInteger)(253_402_300_800 * MicrosecondsPerSecond)
            ? (long)microseconds
            : null;
    }
}
