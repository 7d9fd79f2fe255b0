using StreamLogit.Kafka.Source;
using StreamLogit.Pipeline;

namespace StreamLogit.Kafka.Tests.Source;

public sealed class KafkaSourceContractTests(KafkaMockRoom room) : RecordSourceContract, IClassFixture<KafkaMockRoom>
{
    private string _topic = "";

    // Each joins a group.
    private protected override int Seeks => 6;

    private protected override List<TakenRecord> Arrange(int records)
    {
        _topic = room.NewName("quay");
        room.Cluster.CreateTopic(_topic, 1);
        var taken = Enumerable.Range(0, records).Select(i => new TakenRecord(Record(i), i)).ToList();
        room.Produce(_topic, 0, taken.Select(record => record.Text));
        return taken;
    }

    private protected override IRecordSource Open() =>
        new KafkaSource(KafkaMockRoom.Source(room.NewName("group"), _topic), room.Connect(), 1000, OutputKind.Files);
}
