using System.Text;

namespace StreamLogit.Pipeline.Definition;

/// <summary>Turns byte offsets of a UTF-8 text into places.</summary>
internal sealed class TextPlaces
{
    private readonly byte[] _utf8;
    private readonly Func<int, int, DefinitionPlace> _place;
    private readonly List<int> _lineStarts = [0];

    private TextPlaces(byte[] utf8, Func<int, int, DefinitionPlace> place)
    {
        _utf8 = utf8;
        _place = place;
        for (int i = 0; i < utf8.Length; i++)
        {
            if (utf8[i] == (byte)'\n') _lineStarts.Add(i + 1);
        }
    }

    /// <summary>The places of a file.</summary>
    public static TextPlaces OfFile(string file, byte[] utf8) => new(utf8, (line, column) => new DefinitionPlace(file, line, column));

    /// <summary>The places of a text that is short enough to be a place as a whole.</summary>
    public static TextPlaces Whole(DefinitionPlace place, byte[] utf8) => new(utf8, (_, _) => place);

    public DefinitionPlace At(long offset)
    {
        int end = (int)Math.Clamp(offset, 0, _utf8.Length);
        int index = _lineStarts.BinarySearch(end);
        int line = index >= 0 ? index : ~index - 1;
        return _place(line + 1, Encoding.UTF8.GetCharCount(_utf8, _lineStarts[line], end - _lineStarts[line]) + 1);
    }

    /// <summary>The place of a byte counted within its line, as JSON errors give it; lines from 0.</summary>
    public DefinitionPlace At(long line, long byteInLine) => At(_lineStarts[(int)Math.Clamp(line, 0, _lineStarts.Count - 1)] + byteInLine);
}
