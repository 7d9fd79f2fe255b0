using System.Globalization;
using System.Text;

namespace StreamLogit.Pipeline.Definition;

/// <summary>Paths as messages print them and overrides write them: <c>learning.bank[0].step</c>, <c>record.labelValues["a.b"]</c>.</summary>
internal static class DefinitionPath
{
    /// <summary>The path of a member of the object at <paramref name="path"/>.</summary>
    public static string Member(string path, string key)
    {
        if (!IsPlain(key)) return $"{path}[{Quoted.Text(key)}]";
        return path.Length == 0 ? key : $"{path}.{key}";
    }

    /// <summary>The path of an item of the list at <paramref name="path"/>.</summary>
    public static string Item(string path, int index) => FormattableString.Invariant($"{path}[{index}]");

    /// <summary>Reads a path up to the end of the text or to an equals sign outside quotes.</summary>
    /// <returns>The parts and the length read, or null where the text does not begin with a path.</returns>
    public static (List<PathPart> Parts, int Length)? Parse(string text)
    {
        var parts = new List<PathPart>();
        int at = 0;
        while (at < text.Length && text[at] != '=')
        {
            bool bracket = text[at] == '[';
            if (!bracket && parts.Count > 0 && text[at++] != '.') return null;
            int length = bracket ? ParseBracket(text.AsSpan(at), parts) : ParseKey(text.AsSpan(at), parts);
            if (length == 0) return null;
            at += length;
        }
        return parts.Count == 0 || parts[0].Key is null ? null : (parts, at);
    }

    private static int ParseKey(ReadOnlySpan<char> text, List<PathPart> parts)
    {
        int end = text.IndexOfAny(".[=");
        var key = end < 0 ? text : text[..end];
        if (key.Length > 0) parts.Add(new PathPart(key.ToString(), null));
        return key.Length;
    }

    private static int ParseBracket(ReadOnlySpan<char> text, List<PathPart> parts)
    {
        if (!text.StartsWith("[\""))
        {
            int close = text.IndexOf(']');
            if (close < 0 || !int.TryParse(text[1..close], NumberStyles.None, CultureInfo.InvariantCulture, out int index)) return 0;
            parts.Add(new PathPart(null, index));
            return close + 1;
        }
        int quote = 2;
        while (quote < text.Length && text[quote] != '"') quote += text[quote] == '\\' ? 2 : 1;
        if (quote + 1 >= text.Length || text[quote + 1] != ']') return 0;
        byte[] utf8 = Encoding.UTF8.GetBytes(text[1..(quote + 1)].ToString());
        var key = PositionedJson.Parse(utf8, TextPlaces.Whole(default, utf8), out _);
        if (key is null) return 0;
        parts.Add(new PathPart(key.Text, null));
        return quote + 2;
    }

    private static bool IsPlain(string key) =>
        key.Length > 0 && key.All(character => char.IsAsciiLetterOrDigit(character) || character is '_' or '-' or '$');
}
