namespace StreamLogit.Engine.Records;

/// <summary>Reads an object whose keys are known, and hands the values to the parts that they are read for.</summary>
internal sealed unsafe class ObjectReader(
    int maximumDepth, JsonFault fault, RecordFault recordFault, RecordParts parts, OpenKeys keys, SkippedValues skipped)
{
    /// <summary>The keys on the way to a part that hold no object, each with what it holds.</summary>
    private readonly List<(KnownKey Key, JsonToken Token)> _blocked = [];

    private long _record;

    /// <summary>Starts a record.</summary>
    public void Begin()
    {
        _record++;
        _blocked.Clear();
    }

    /// <summary>Ends a record: it is at fault if no object is where one should be, unless the record has the part in its flat form.</summary>
    public void End()
    {
        foreach (var (key, token) in _blocked)
        {
            foreach (var (part, flat) in key.Inner!.Parts)
            {
                if (flat.SeenIn != _record) recordFault.AddNoObject(part, key, token);
            }
        }
    }

    /// <summary>Reads an object. Returns the place behind it, or null after telling the fault.</summary>
    /// <param name="at">Its opening brace.</param>
    /// <param name="known">The keys that it may have.</param>
    /// <param name="depth">How many objects are open around it. Known objects nest as deep as the definition's paths.</param>
    public byte* Read(byte* at, KnownObject known, int depth)
    {
        if (depth >= maximumDepth) return fault.StopTooDeep(at);
        int firstStray = keys.Count;
        at = JsonSyntax.SkipSpace(at + 1);
        if (*at == '}') return at + 1;
        var previous = known.Start;
        while (true)
        {
            var key = previous.Next;
            if (key.Matches(at))
            {
                at += key.QuotedLength;
            }
            else if (key.Next.Matches(at))
            {
                // An optional key is left out.
                key = key.Next;
                at += key.QuotedLength;
            }
            else
            {
                at = Find(at, known, out key);
                if (at == null) return null;
                previous.Next = key;
            }
            if (key.SeenIn == _record || key.Twin is not null && key.Twin.SeenIn == _record) fault.AddDuplicate(key.Name);
            key.SeenIn = _record;

            at = JsonSyntax.SkipSpace(at);
            if (*at != ':') return fault.Stop(at, "':'");
            at = JsonSyntax.SkipSpace(at + 1);
            at = key.IsRead ? Value(at, key, depth + 1) : skipped.Skip(at, depth + 1);
            if (at == null) return null;
            at = JsonSyntax.SkipSpace(at);
            if (*at == ',')
            {
                at = JsonSyntax.SkipSpace(at + 1);
                previous = key;
                continue;
            }
            if (*at != '}') return fault.Stop(at, "',' or '}'");
            keys.Close(firstStray);
            return at + 1;
        }
    }

    /// <summary>Reads a key that is not where it was in the last record, or that has escapes.</summary>
    private byte* Find(byte* at, KnownObject known, out KnownKey key)
    {
        key = known.Stray;
        if (*at != '"') return fault.Stop(at, "a key in quotes");
        byte* start = at + 1;
        byte* end = JsonSyntax.StringEnd(start, fault, out bool isEscaped);
        if (end == null) return null;
        var raw = new ReadOnlySpan<byte>(start, (int)(end - start));
        var name = isEscaped ? keys.Unescape(raw) : raw;
        var found = known.Find(name, KeyFingerprint.Of(name)) ?? known.TryLearn(name);
        if (found is not null)
        {
            key = found;
        }
        else
        {
            key.SeenIn = 0;
            keys.Add(start, raw.Length, isEscaped);
        }
        return end + 1;
    }

    private byte* Value(byte* at, KnownKey key, int depth)
    {
        JsonToken token = default;
        token.Start = at;
        byte first = *at;
        if (first == '"')
        {
            token.Kind = JsonKind.String;
            token.Start = at + 1;
            byte* end = JsonSyntax.StringEnd(at + 1, fault, out token.IsEscaped);
            if (end == null) return null;
            token.Length = (int)(end - token.Start);
            at = end + 1;
        }
        else if (first is (byte)'{' or (byte)'[')
        {
            token.Kind = first == '{' ? JsonKind.Object : JsonKind.Array;
            at = first == '{' && key.Inner is not null ? Read(at, key.Inner, depth) : skipped.Skip(at, depth);
            if (at == null) return null;
        }
        else if (first >= 'a')
        {
            at = JsonSyntax.Literal(at, fault, out token.Kind);
            if (at == null) return null;
            token.Length = (int)(at - token.Start);
        }
        else
        {
            token.Kind = JsonKind.Number;
            at = JsonNumber.Read(at, fault, out token.Number);
            if (at == null) return null;
            token.Length = (int)(at - token.Start);
        }
        foreach (var part in key.Parts) parts.Read(part, token);
        if (key.Inner is not null && token.Kind is not (JsonKind.Object or JsonKind.Null)) _blocked.Add((key, token));
        return at;
    }
}
