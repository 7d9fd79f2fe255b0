namespace StreamLogit.Kafka.Tests.MockCluster;

/// <summary>Requests of the Kafka protocol, by their numbers in https://kafka.apache.org/protocol#protocol_api_keys.</summary>
public enum ApiKey
{
    Produce = 0,
    Fetch = 1,
    ListOffsets = 2,
    Metadata = 3,
    OffsetCommit = 8,
    OffsetFetch = 9,
    FindCoordinator = 10,
    JoinGroup = 11,
    Heartbeat = 12,
    SyncGroup = 14,
    InitProducerId = 22,
    AddPartitionsToTxn = 24,
    AddOffsetsToTxn = 25,
    EndTxn = 26,
    TxnOffsetCommit = 28,
}
