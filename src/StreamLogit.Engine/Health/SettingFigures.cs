namespace StreamLogit.Engine.Health;

/// <summary>Figures of a setting of the bank, had it been published.</summary>
/// <param name="Name">The setting.</param>
/// <param name="LogLoss">Its mean log-loss in nats.</param>
/// <param name="Brier">Its mean Brier score.</param>
/// <param name="BlendWeight">Its present weight in the blend, 0 to 1.</param>
public sealed record SettingFigures(string Name, double LogLoss, double Brier, double BlendWeight);
