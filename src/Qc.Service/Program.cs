using Qc.Service.Hosting;

await QcHost.RunAsync(args);
