using System.Buffers;
using System.Globalization;
using System.Text;
using StreamLogit.Engine.Records;

namespace StreamLogit.Pipeline.Formats;

/// <summary>
/// Writes rejects as JSON objects. The record stands there as text; where its bytes are not UTF-8, the escape <c>\ufffd</c> stands for them.
/// </summary>
public static class RejectJson
{
    /// <summary>Adds a reject to a buffer, without a line end.</summary>
    /// <param name="records">The batch.</param>
    /// <param name="index">The reject among its records.</param>
    /// <param name="buffer">The buffer.</param>
    /// <param name="mostRecordBytes">How many bytes of the record are written at most.</param>
    public static void Write(RecordBatch records, int index, ArrayBufferWriter<byte> buffer, int mostRecordBytes = int.MaxValue)
    {
        ref readonly var record = ref records.Record(index);
        buffer.Write("{\"position\":\""u8);
        WriteText(records.OriginOf(index), buffer);
        // An origin that ends in @ is a partition, whose positions are offsets.
        if (!records.OriginOf(index).EndsWith('@')) buffer.Write(":"u8);
        record.Position.TryFormat(buffer.GetSpan(20), out int digits, provider: CultureInfo.InvariantCulture);
        buffer.Advance(digits);
        buffer.Write("\",\"reason\":\""u8);
        WriteText(record.Reason.Code(), buffer);
        if (record.Detail is null)
        {
            buffer.Write("\",\"detail\":null,\"record\":\""u8);
        }
        else
        {
            buffer.Write("\",\"detail\":\""u8);
            WriteText(record.Detail, buffer);
            buffer.Write("\",\"record\":\""u8);
        }
        var bytes = records.RecordBytes(index);
        JsonText.WriteBytes(bytes[..Math.Min(bytes.Length, mostRecordBytes)], buffer);
        buffer.Write("\"}"u8);
    }

    private static void WriteText(string text, ArrayBufferWriter<byte> buffer)
    {
        int most = Encoding.UTF8.GetMaxByteCount(text.Length);
        var room = buffer.GetSpan(most + JsonText.MaximumLength(most));
        // The UTF-8 stands behind all the room that its escaped form can take.
        var utf8 = room[JsonText.MaximumLength(most)..];
        utf8 = utf8[..Encoding.UTF8.GetBytes(text, utf8)];
        buffer.Advance(JsonText.Write(utf8, room));
    }
}
