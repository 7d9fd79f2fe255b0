namespace StreamLogit.Engine.Records;

/// <summary>Passes over values that nobody reads, but checks them as strictly as the others.</summary>
internal sealed unsafe class SkippedValues(int maximumDepth, JsonFault fault, OpenKeys keys)
{
    private const int InArray = -1;

    /// <summary>For every object open: how many keys there were before it. For an array -1.</summary>
    private int[] _open = new int[32];

    /// <summary>Passes over one value. Returns the place behind it, or null after telling the fault.</summary>
    /// <param name="at">Its first byte.</param>
    /// <param name="depth">How many objects and arrays are open around it.</param>
    public byte* Skip(byte* at, int depth) => *at is (byte)'{' or (byte)'[' ? SkipNested(at, depth) : Scalar(at);

    private byte* SkipNested(byte* at, int depth)
    {
        int open = 0;
        while (true)
        {
            bool isObject = *at == '{';
            if (isObject || *at == '[')
            {
                if (depth + open >= maximumDepth) return fault.StopTooDeep(at);
                if (open == _open.Length) Array.Resize(ref _open, open * 2);
                _open[open++] = isObject ? keys.Count : InArray;
                at = JsonSyntax.SkipSpace(at + 1);
                if (*at != (isObject ? '}' : ']'))
                {
                    if (!isObject) continue;
                    at = Key(at);
                    if (at == null) return null;
                    continue;
                }
                at++;
                open--;
            }
            else
            {
                at = Scalar(at);
                if (at == null) return null;
            }

            // A value has ended, and with it perhaps what is around it.
            bool isNext = false;
            while (!isNext)
            {
                if (open == 0) return at;
                at = JsonSyntax.SkipSpace(at);
                int first = _open[open - 1];
                if (*at == ',')
                {
                    at = JsonSyntax.SkipSpace(at + 1);
                    if (first != InArray) at = Key(at);
                    if (at == null) return null;
                    isNext = true;
                }
                else if (first == InArray)
                {
                    if (*at != ']') return fault.Stop(at, "',' or ']'");
                    at++;
                    open--;
                }
                else
                {
                    if (*at != '}') return fault.Stop(at, "',' or '}'");
                    keys.Close(first);
                    at++;
                    open--;
                }
            }
        }
    }

    private byte* Scalar(byte* at)
    {
        if (*at == '"')
        {
            byte* end = JsonSyntax.StringEnd(at + 1, fault, out _);
            return end == null ? null : end + 1;
        }
        return *at >= 'a' ? JsonSyntax.Literal(at, fault, out _) : JsonNumber.Read(at, fault, out _);
    }

    /// <summary>Passes over a key and its colon, to the value.</summary>
    private byte* Key(byte* at)
    {
        if (*at != '"') return fault.Stop(at, "a key in quotes");
        byte* start = at + 1;
        byte* end = JsonSyntax.StringEnd(start, fault, out bool isEscaped);
        if (end == null) return null;
        keys.Add(start, (int)(end - start), isEscaped);
        at = JsonSyntax.SkipSpace(end + 1);
        return *at == ':' ? JsonSyntax.SkipSpace(at + 1) : fault.Stop(at, "':'");
    }
}
