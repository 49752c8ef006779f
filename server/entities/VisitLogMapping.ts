import { Column, Entity, JoinColumn, ManyToOne, PrimaryColumn, type Relation } from 'typeorm';
import type { RememberedMapping } from '../../shared/api/visit-log-mapping.ts';
import type { Site } from './Site.ts';

/** How the last accepted visit log of a site was read; offered at the next upload. */
@Entity({ name: 'visit_log_mapping' })
export class VisitLogMapping {
  @PrimaryColumn('text') siteId: string;

  @ManyToOne('Site', { onDelete: 'RESTRICT', nullable: false })
  @JoinColumn({ name: 'siteId' })
  site: Relation<Site>;

  /** Headers and words of the file, screened; never a value of a single row. */
  @Column('simple-json') mapping: RememberedMapping;
  @Column('text') savedBy: string;
  @Column('integer') savedAt: number;
}
