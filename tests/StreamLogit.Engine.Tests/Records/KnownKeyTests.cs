using System.Text;
using StreamLogit.Engine.Definition;
using StreamLogit.Engine.Records;

namespace StreamLogit.Engine.Tests.Records;

/// <summary>Keys are found whatever their length and order, also right after records with other keys.</summary>
public class KnownKeyTests
{
    [Fact]
    public void Decode_KeysOfEveryLengthInManyOrders_AreFound()
    {
        string[] names = [.. Enumerable.Range(1, 140).Select(length => new string((char)('a' + length % 26), length))];
        var schema = DecodedText.SchemaOf(
            DecodedText.Options with { MaximumBytes = 1 << 20 }, [.. names.Select(name => new NumberFeature(name, NumberScale.None))]);
        var batch = new RecordBatch(schema);
        for (int round = 0; round < 12; round++)
        {
            var order = Enumerable.Range(0, names.Length);
            if (round >= 4) order = order.OrderBy(i => (i * 31 + round * 17) % 139).Where(i => round < 8 || i % 3 != round % 3);
            string blank = round % 4 == 3 ? " " : "";
            var members = order.Select(i => $"\"{names[i]}\"{blank}:{blank}{i + 1000 * round}");
            batch.Add(Encoding.UTF8.GetBytes($"{{\"id\":\"a\",{string.Join("," + blank, members)},\"time\":\"2026-03-01T08:15:30Z\"}}"), round);
        }
        new RecordDecoder(schema).Decode(batch);
        for (int round = 0; round < 12; round++)
        {
            Assert.Equal(RejectReason.None, batch.Records[round].Reason);
            for (int i = 0; i < names.Length; i++)
            {
                var field = batch.Fields(round)[i];
                Assert.Equal(round < 8 || i % 3 != round % 3, field.IsPresent);
                if (field.IsPresent) Assert.Equal(i + 1000 * round, field.Number);
            }
        }
    }

    [Fact]
    public void Decode_KeysThatBeginOrEndAlike_AreToldApart()
    {
        string[] names = ["amount", "amount1", "amount2", "amounts", "1amount", "amount-of-the-day", "amount-of-one-day", "amount-of-the-dab", "amount-of-the-other-day", "amount-of-any-other-day", "", "q", "b", "\"", "\\", "\n", "é", "a.b"];
        var schema = DecodedText.SchemaOf(DecodedText.Options, [.. names.Select(name => new NumberFeature(name, NumberScale.None))]);
        var batch = new RecordBatch(schema);
        for (int only = 0; only < names.Length; only++)
        {
            string name = names[only].Replace("\\", "\\\\").Replace("\"", "\\\"").Replace("\n", "\\n");
            for (int again = 0; again < 2; again++)
                batch.Add(Encoding.UTF8.GetBytes($"{{\"id\":\"a\",\"time\":\"2026-03-01T08:15:30Z\",\"{name}\":{only}}}"), only);
        }
        new RecordDecoder(schema).Decode(batch);
        for (int i = 0; i < batch.Count; i++)
        {
            Assert.Equal(RejectReason.None, batch.Records[i].Reason);
            var fields = batch.Fields(i);
            for (int field = 0; field < names.Length; field++) Assert.Equal(field == i / 2, fields[field].IsPresent);
            Assert.Equal(i / 2, fields[i / 2].Number);
        }
    }
}
