using System.Runtime.CompilerServices;

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
        long record = _record;
        var previous = known.Start;
        while (true)
        {
            var key = previous.Next;
            if (key.Matches(at))
            {
                at += key.Length;
            }
            else if (previous.OtherNext.Matches(at))
            {
                key = previous.OtherNext;
                at += key.Length;
            }
            else if (key.Next.Matches(at))
            {
                // An optional key is left out.
                key = key.Next;
                at += key.Length;
            }
            else
            {
                at = Find(at, known, out key);
                if (at == null) return null;
                previous.OtherNext = previous.Next;
                previous.Next = key;
            }
            if (key.SeenIn == record) fault.AddDuplicate(key.Name);
            key.SeenIn = record;

            at = JsonSyntax.SkipSpace(at);
            at = Value(at, key, depth + 1);
            if (at == null) return null;
            if (*at != ',')
            {
                at = JsonSyntax.SkipSpace(at);
                if (*at == '}')
                {
                    keys.Close(firstStray);
                    return at + 1;
                }
                if (*at != ',') return fault.Stop(at, "',' or '}'");
            }
            at = JsonSyntax.SkipSpace(at + 1);
            previous = key;
        }
    }

    /// <summary>Reads a value for what its key is for.</summary>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private byte* Value(byte* at, KnownKey key, int depth)
    {
        switch (key.Use)
        {
            case KeyUse.Number when *at is >= (byte)'0' and <= (byte)'9' or (byte)'-': return Number(at, key, depth);
            case KeyUse.Category when *at == '"': return Text(at, key, depth);
            case KeyUse.Id or KeyUse.Time when *at == '"': return Text(at, key, depth);
            case KeyUse.Unread: return skipped.Skip(at, depth);
            default: return GeneralValue(at, key, depth);
        }
    }

    // Not inlined, as the loop over the keys then keeps all it needs in registers.
    [MethodImpl(MethodImplOptions.NoInlining)]
    private byte* Number(byte* at, KnownKey key, int depth)
    {
        byte* behind = JsonNumber.Read(at, fault, out double number);
        return behind == null || parts.TryTakeNumber(key.Field, number) ? behind : GeneralValue(at, key, depth);
    }

    [MethodImpl(MethodImplOptions.NoInlining)]
    private byte* Text(byte* at, KnownKey key, int depth)
    {
        byte* end = JsonSyntax.FindSpecial(at + 1);
        if (*end != '"') return GeneralValue(at, key, depth);
        int length = (int)(end - at - 1);
        bool isTaken = true;
        if (key.Use == KeyUse.Category) parts.TakeCategory(key.Field, at + 1, length);
        else if (key.Use == KeyUse.Time) isTaken = parts.TryTakeTime(at + 1, length);
        else isTaken = parts.TryTakeId(at + 1, length);
        return isTaken ? end + 1 : GeneralValue(at, key, depth);
    }

    /// <summary>Reads a key, and its colon, that is not where it was in the last record, or that has escapes or a blank behind it.</summary>
    [MethodImpl(MethodImplOptions.NoInlining)]
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
        at = JsonSyntax.SkipSpace(end + 1);
        return *at == ':' ? at + 1 : fault.Stop(at, "':'");
    }

    [MethodImpl(MethodImplOptions.NoInlining)]
    private byte* GeneralValue(byte* at, KnownKey key, int depth)
    {
        if (key.Twin is not null && key.Twin.SeenIn == _record) fault.AddDuplicate(key.Name);
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
