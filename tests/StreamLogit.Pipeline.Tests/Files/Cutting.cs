using System.Text;
using StreamLogit.Pipeline.Files;

namespace StreamLogit.Pipeline.Tests.Files;

/// <summary>Has a cutter cut bytes that come in pieces, as a source does.</summary>
internal static class Cutting
{
    /// <summary>Cuts a text (Latin-1, so that any byte can be written) that comes in pieces of a length.</summary>
    public static List<TakenRecord> Cut(IRecordCutter cutter, string text, int pieceLength = int.MaxValue)
    {
        byte[] bytes = Encoding.Latin1.GetBytes(text);
        var batch = Schemas.NewBatch();
        int start = 0;
        int end = 0;
        bool atEnd = false;
        while (true)
        {
            int before = batch.Count;
            var unread = bytes.AsSpan(start, end - start);
            int taken = cutter.NeedsHeader ? cutter.CutHeader(unread, atEnd) : cutter.Cut(unread, atEnd, batch);
            start += taken;
            if (taken > 0 || batch.Count > before) continue;
            if (atEnd) break;
            atEnd = end == bytes.Length;
            end = (int)Math.Min(bytes.Length, (long)end + pieceLength);
        }
        Assert.Equal(bytes.Length, start);
        Assert.False(cutter.IsWithinRecord);
        return [.. TakenRecord.Of(batch)];
    }
}
